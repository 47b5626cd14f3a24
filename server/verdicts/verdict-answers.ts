/** A stored verdict as the text it is answered with, whole or the fields that were asked for. */
import type { VerdictStore } from '../../db/verdicts.ts';
import { type Verdict, verdict } from '../schemas/verdict.ts';
import { chosenFields, storedVerdict } from './stored-verdicts.ts';

export function verdictText(verdicts: VerdictStore, id: string, fields?: readonly (keyof Verdict)[]): string | undefined {
  const row = verdicts.findById(id);
  if (row === undefined) return undefined;
  // The response schema is an allow-list here as everywhere.
  const whole = verdict.parse(storedVerdict(row));
  return JSON.stringify(fields === undefined ? whole : chosenFields(whole, fields));
}
