/** Tries a changed circuit at a few dial positions, before the whole dial is swept for it. */
import type { Pairing } from '../pairing.ts';
import { LEAST_STEADY_RANGE } from '../tolerances.ts';
import type { CornerInputs, DialRow, JudgeOptions } from '../verdict.ts';
import { atCorner } from './corners.ts';
import { walkDial } from './dial-visit.ts';
import { type Goal, isDecided } from './early-ending.ts';
import type { EffortTally } from './effort.ts';
import { TRIAL_POSITIONS } from './judgement-figures.ts';

/** positions spread over the dial, both ends among them */
export function trialPositions(positions: readonly number[]): number[] {
  const last = positions.length - 1;
  if (last < TRIAL_POSITIONS) return [...positions];
  return Array.from({ length: TRIAL_POSITIONS }, (_, k) => positions[Math.round((k * last) / (TRIAL_POSITIONS - 1))] as number);
}

/** positions that any workable dial must be steady at */
export function topPositions(positions: readonly number[]): number[] {
  const top = positions[positions.length - 1] ?? 0;
  return positions.filter((p) => p > top - LEAST_STEADY_RANGE || p === top);
}

/** whether the way up through these positions, from rest, is already enough to say that it misses the goal */
export function failsOnTheWayUp(
  pairing: Pairing,
  corner: CornerInputs,
  options: JudgeOptions,
  positions: readonly number[],
  effort: EffortTally,
  goal: Goal = 'grade',
): boolean {
  const there = atCorner(pairing, corner);
  const rows: DialRow[] = [];
  let failed = false;
  walkDial(there, { ...options, dialPositions: positions }, effort, null, (row) => {
    // without early endings the way down is visited too, to measure what leaving it out spares
    if (rows.length < positions.length) rows.push(row);
    failed ||= isDecided(goal, there, rows, positions);
    return options.thorough !== true && (failed || rows.length === positions.length);
  });
  return failed;
}
