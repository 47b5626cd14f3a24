/**
 * Judges a pairing once: completes it, looks for the stored verdict of the same question, and else has it simulated and stored. The
 * same question asked again while it is being judged waits for the one simulation.
 */
import type { VerdictRow, VerdictStore } from '../../db/verdicts.ts';
import { MODEL_VERSION } from '../../model/index.ts';
import type { AskedPairing } from '../schemas/pairing.ts';
import type { Verdict } from '../schemas/verdict.ts';
import type { AskedJudgement } from '../simulation/asked-circuit.ts';
import type { Simulation, SimulationFailure } from '../simulation/simulation.ts';
import { canonicalJson, fingerprintOf, verdictIdOf } from './canonical-inputs.ts';
import { type Completion, completePairing } from './pairing-completion.ts';
import { toModel } from './pairing-to-model.ts';
import { recordedJudgement } from './recorded-judgement.ts';
import { storedVerdict } from './stored-verdicts.ts';

export interface JudgingDependencies {
  readonly simulation: Simulation;
  readonly verdicts: VerdictStore;
  readonly now: () => Date;
}

/** where the verdict came from: simulated for this call, simulated for another that asked the same meanwhile, or stored before */
export type VerdictSource = 'computed' | 'shared' | 'stored';

export type JudgingResult =
  | { readonly ok: true; readonly verdict: Verdict; readonly source: VerdictSource; readonly halfCycles: number }
  | { readonly ok: false; readonly failure: SimulationFailure };

type Judged =
  | { readonly ok: true; readonly row: VerdictRow; readonly stored: boolean }
  | { readonly ok: false; readonly failure: SimulationFailure };

export type JudgeVerdict = (asked: AskedPairing) => Promise<JudgingResult>;

export function verdictJudging({ simulation, verdicts, now }: JudgingDependencies): JudgeVerdict {
  const underWay = new Map<string, Promise<Judged>>();

  const simulateAndStore = async (fingerprint: string, completion: Completion): Promise<Judged> => {
    const { pairing, options } = toModel(completion);
    const simulated = await simulation.judge(pairing, options);
    if (!simulated.ok) return simulated;
    return { ok: true, ...verdicts.insertOnce(verdictRowOf(fingerprint, completion, simulated.value, now())) };
  };

  return async (asked) => {
    const completion = completePairing(asked);
    const fingerprint = fingerprintOf(completion, MODEL_VERSION);

    const known = verdicts.findByFingerprint(fingerprint);
    if (known !== undefined) return answer(known, 'stored');

    const running = underWay.get(fingerprint);
    if (running !== undefined) {
      const shared = await running;
      return shared.ok ? answer(shared.row, 'shared') : shared;
    }

    // Not tied to the request that asked: others may wait for it, and what is computed is worth storing.
    const judging = simulateAndStore(fingerprint, completion).finally(() => underWay.delete(fingerprint));
    underWay.set(fingerprint, judging);
    const judged = await judging;
    // Another process on the same record may have stored it first.
    return judged.ok ? answer(judged.row, judged.stored ? 'computed' : 'stored') : judged;
  };
}

function answer(row: VerdictRow, source: VerdictSource): JudgingResult {
  const verdict = storedVerdict(row);
  return { ok: true, verdict, source, halfCycles: source === 'computed' ? verdict.counters.halfCycles : 0 };
}

export function verdictRowOf(
  fingerprint: string,
  { pairing, assumptions }: Completion,
  judgement: AskedJudgement,
  createdAt: Date,
): VerdictRow {
  return {
    id: verdictIdOf(fingerprint),
    fingerprint,
    model_version: MODEL_VERSION,
    created_at: createdAt.toISOString(),
    grade: judgement.grade,
    summary: judgement.summary,
    mains_voltage: pairing.mains.voltage_V,
    mains_frequency: pairing.mains.frequency_Hz,
    lamp_count: pairing.lamps.reduce((sum, { count }) => sum + count, 0),
    pairing: canonicalJson(pairing),
    assumptions: JSON.stringify(assumptions),
    judgement: JSON.stringify(recordedJudgement(judgement)),
  };
}
