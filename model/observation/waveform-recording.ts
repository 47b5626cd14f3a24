/** Records waveforms of one dial position. STUB until the engine lands. */
import type { Outcome } from '../failures.ts';
import type { Pairing } from '../pairing.ts';
import type { Sweep, Waveforms } from '../verdict.ts';

export function recordWaveforms(
  _pairing: Pairing,
  _dialPositions: readonly number[],
  _at: { sweep: Sweep; position: number },
): Outcome<Waveforms> {
  throw new Error('engine not landed yet');
}
