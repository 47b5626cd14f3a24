/** Tells during a sweep whether its rows so far have already decided what is asked, so that the rest of the dial need not be visited. */
import type { Pairing } from '../pairing.ts';
import { LEAST_STEADY_RANGE } from '../tolerances.ts';
import type { DialRow } from '../verdict.ts';
import { ratingReasons } from './ratings.ts';

/** what a sweep is to find out: the grade, or only whether it is suitable */
export type Goal = 'grade' | 'suitable';

/** an undecided row might still turn out steady: it never ends a sweep */
const mayBeFine = (row: DialRow): boolean => row.state === 'steady' || row.state === 'dark' || row.state === 'undecided';
const maybeSteady = (row: DialRow): boolean => row.state === 'steady' || row.state === 'undecided';

function maySuit(rows: readonly DialRow[]): boolean {
  const lightAt = { up: Number.POSITIVE_INFINITY, down: Number.POSITIVE_INFINITY };
  const darkAt = { up: Number.NEGATIVE_INFINITY, down: Number.NEGATIVE_INFINITY };
  for (const row of rows) {
    if (!mayBeFine(row)) return false;
    if (row.state === 'steady') lightAt[row.sweep] = Math.min(lightAt[row.sweep], row.position);
    if (row.state === 'dark') darkAt[row.sweep] = Math.max(darkAt[row.sweep], row.position);
  }
  return darkAt.up < lightAt.up && darkAt.down < lightAt.down;
}

/** a steady range that reaches the top must begin above every position that is not steady */
function maySuitConditionally(rows: readonly DialRow[], positions: readonly number[]): boolean {
  const highestBad = Math.max(Number.NEGATIVE_INFINITY, ...rows.filter((r) => !maybeSteady(r)).map((r) => r.position));
  const from = positions.find((p) => p > highestBad);
  const top = positions[positions.length - 1];
  return from !== undefined && top !== undefined && top - from >= LEAST_STEADY_RANGE;
}

export function isDecided(goal: Goal, pairing: Pairing, rows: readonly DialRow[], positions: readonly number[]): boolean {
  const last = rows.slice(-1);
  if (ratingReasons(pairing, last).length > 0) return true;
  if (maySuit(rows)) return false;
  return goal === 'suitable' || !maySuitConditionally(rows, positions);
}
