/** Turns the answer to a question into what the record holds: a verdict's row, or a failure with the pairing as it was asked. */
import { MODEL_VERSION } from '../../model/index.ts';
import type { AnswerFailure } from '../queue/judging-queue.ts';
import type { AskedPairing } from '../schemas/pairing.ts';
import type { AskedJudgement } from '../simulation/asked-circuit.ts';
import { canonicalJson, fingerprintOf } from '../verdicts/canonical-inputs.ts';
import { completePairing } from '../verdicts/pairing-completion.ts';
import { verdictRowOf } from '../verdicts/verdict-judging.ts';
import type { ScreeningStores } from './screening-dependencies.ts';

/** Stores the verdict unless somebody else did meanwhile; gives its `seq`. */
export function storeJudgement(
  { verdicts, screeningVerdicts }: Pick<ScreeningStores, 'verdicts' | 'screeningVerdicts'>,
  asked: AskedPairing,
  judgement: AskedJudgement,
  at: Date,
): number {
  const completion = completePairing(asked);
  const fingerprint = fingerprintOf(completion, MODEL_VERSION);
  verdicts.insertOnce(verdictRowOf(fingerprint, completion, judgement, at));
  const seq = screeningVerdicts.seqOf(fingerprint);
  if (seq === undefined) throw new Error('A verdict was stored and not found.');
  return seq;
}

export function storeFailure(
  { screenings }: Pick<ScreeningStores, 'screenings'>,
  screening: number,
  position: number,
  asked: AskedPairing,
  { kind, detail, attempts }: AnswerFailure,
): void {
  screenings.addFailure(screening, { position, kind, detail, attempts, pairing: canonicalJson(asked) });
}
