/** Stored verdicts as the bytes they are answered with. A stored verdict never changes, so what was written once is kept. */
import type { VerdictStore } from '../../db/verdicts.ts';
import { type Answer, answerOf, keepingAnswers } from '../kept-answers.ts';
import { type Verdict, verdict } from '../schemas/verdict.ts';
import { chosenFields, storedVerdict } from './stored-verdicts.ts';

/** bytes: about two thousand verdicts of 30 KB */
const MOST_BYTES = 64 * 1024 * 1024;

export type VerdictAnswers = (id: string, fields?: readonly (keyof Verdict)[]) => Answer | undefined;

export function verdictAnswers(verdicts: VerdictStore): VerdictAnswers {
  const kept = keepingAnswers<Answer>(MOST_BYTES);
  return (id, fields) => {
    const ready = fields === undefined ? kept.get(id) : undefined;
    if (ready !== undefined) return ready;
    const row = verdicts.findById(id);
    if (row === undefined) return undefined;
    // The response schema is an allow-list here as everywhere.
    const whole = verdict.parse(storedVerdict(row));
    if (fields !== undefined) return answerOf(JSON.stringify(chosenFields(whole, fields)));
    const answer = answerOf(JSON.stringify(whole));
    kept.keep(id, answer);
    return answer;
  };
}
