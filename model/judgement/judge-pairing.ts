/** Judges one pairing over the dial. STUB until the engine lands. */
import type { Outcome } from '../failures.ts';
import type { Pairing } from '../pairing.ts';
import type { Judgement, JudgeOptions } from '../verdict.ts';

export function judgePairing(_pairing: Pairing, _options: JudgeOptions): Outcome<Judgement> {
  throw new Error('engine not landed yet');
}
