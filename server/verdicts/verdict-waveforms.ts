/** Records the waveforms of a stored verdict at one of its dial positions, simulated again from the stored pairing. */
import type { VerdictStore } from '../../db/verdicts.ts';
import { MODEL_VERSION, type Sweep } from '../../model/index.ts';
import type { WaveformsAnswer } from '../schemas/verdict-calls.ts';
import { shownPairing } from '../simulation/asked-circuit.ts';
import type { Simulation, SimulationFailure } from '../simulation/simulation.ts';
import { waveformsToWire } from './judgement-to-wire.ts';
import { toModel } from './pairing-to-model.ts';
import { storedJudgement, storedQuestion } from './stored-verdicts.ts';

export interface WaveformQuestion {
  readonly id: string;
  readonly dial_pct: number;
  readonly sweep: Sweep;
}

export type WaveformsFailure =
  | SimulationFailure
  | { readonly kind: 'verdict-not-found' }
  | { readonly kind: 'not-judged-there'; readonly path: 'dial_pct' | 'sweep'; readonly message: string };

export type WaveformsResult =
  | { readonly ok: true; readonly waveforms: WaveformsAnswer }
  | { readonly ok: false; readonly failure: WaveformsFailure };

export async function verdictWaveforms(
  { simulation, verdicts }: { readonly simulation: Simulation; readonly verdicts: VerdictStore },
  { id, dial_pct, sweep }: WaveformQuestion,
): Promise<WaveformsResult> {
  const row = verdicts.findById(id);
  if (row === undefined) return { ok: false, failure: { kind: 'verdict-not-found' } };
  const { pairing, options } = toModel(storedQuestion(row));

  const positions = options.dialPositions;
  if (!positions.includes(dial_pct)) {
    const message = `must be a dial position the verdict was judged at: ${positions.join(', ')}`;
    return { ok: false, failure: { kind: 'not-judged-there', path: 'dial_pct', message } };
  }
  if (sweep === 'down' && positions.length === 1) {
    const message = 'must be "up": one dial position alone is judged from a fresh start, there is no way down';
    return { ok: false, failure: { kind: 'not-judged-there', path: 'sweep', message } };
  }

  const recorded = await simulation.recordWaveforms(shownPairing(pairing, storedJudgement(row).foundLamps), positions, {
    sweep,
    position: dial_pct,
  });
  if (!recorded.ok) return recorded;
  return { ok: true, waveforms: { verdictId: id, modelVersion: MODEL_VERSION, ...waveformsToWire(recorded.value) } };
}

const LINE_END = '\r\n';

/** The same columns as CSV (RFC 4180): a heading, then one line an instant. Numbers alone, so nothing needs quoting. */
export function waveformsCsv({ columns }: WaveformsAnswer): string {
  const names = Object.keys(columns) as (keyof typeof columns)[];
  const lines = columns.time_ms.map((_, index) => names.map((name) => columns[name][index]).join(','));
  return [names.join(','), ...lines, ''].join(LINE_END);
}
