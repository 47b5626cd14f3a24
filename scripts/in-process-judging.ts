/** Judges a pairing in this process: the service's own use cases without its server, its threads and its record. Nothing is stored. */
import { MODEL_VERSION } from '../model/index.ts';
import type { AskedPairing } from '../server/schemas/pairing.ts';
import type { Verdict } from '../server/schemas/verdict.ts';
import { directSimulation } from '../server/simulation/direct-simulation.ts';
import type { SimulationFailure } from '../server/simulation/simulation.ts';
import { fingerprintOf, verdictIdOf } from '../server/verdicts/canonical-inputs.ts';
import { verdictToWire } from '../server/verdicts/judgement-to-wire.ts';
import { completePairing } from '../server/verdicts/pairing-completion.ts';
import { toModel } from '../server/verdicts/pairing-to-model.ts';

export type InProcessJudging =
  | { readonly ok: true; readonly verdict: Verdict }
  /** lines for a terminal, the first one the heading */
  | { readonly ok: false; readonly complaint: readonly string[] };

export async function judgeInProcess(asked: AskedPairing, now: Date): Promise<InProcessJudging> {
  const completion = completePairing(asked);
  if (!completion.ok) {
    const places = completion.failure.paths.map((path) => `${path} give it as "iv-table", "reservoir" or "resistive"`);
    return { ok: false, complaint: ['a lamp given as a phase table must be fitted to another kind of load first', ...places] };
  }
  const { pairing, assumptions } = completion;
  const model = toModel(pairing);
  const simulated = await directSimulation.judge(model.pairing, model.options);
  if (!simulated.ok) return { ok: false, complaint: complaintOf(simulated.failure) };
  const verdict = verdictToWire({
    id: verdictIdOf(fingerprintOf(pairing, MODEL_VERSION)),
    modelVersion: MODEL_VERSION,
    createdAt: now.toISOString(),
    pairing,
    assumptions,
    judgement: simulated.value,
  });
  return { ok: true, verdict };
}

function complaintOf(failure: SimulationFailure): readonly string[] {
  if (failure.kind === 'queue-full') throw new Error('A simulation in the calling thread has no queue.');
  return [
    'this pairing cannot be simulated, although each field is valid by itself',
    ...failure.issues.map(({ path, message }) => `${path} ${message}`),
  ];
}
