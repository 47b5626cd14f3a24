/** Grades one corner's dial rows: suitable, conditional on a lowest dial setting, unsuitable, or undetermined where it could not be decided. */
import type { Pairing } from '../pairing.ts';
import { LEAST_STEADY_RANGE } from '../tolerances.ts';
import type { Condition, DialRow, Grade, PopOn, Reason } from '../verdict.ts';
import { ratingReasons } from './ratings.ts';
import { dialReasons } from './reasons.ts';
import { byPosition, popOn, steadyFrom, steadyWhereLit } from './steady-range.ts';

export interface CornerGrade {
  readonly grade: Grade;
  readonly conditions: readonly Condition[];
  readonly reasons: readonly Reason[];
  readonly popOn: PopOn;
}

export function gradeDial(pairing: Pairing, dial: readonly DialRow[]): CornerGrade {
  const pop = popOn(dial);
  const ratings = ratingReasons(pairing, dial);
  const reasons = [...ratings, ...dialReasons(dial, pop)];
  const graded = (grade: Grade, conditions: readonly Condition[] = []): CornerGrade => ({ grade, conditions, reasons, popOn: pop });
  if (ratings.length > 0) return graded('unsuitable');
  if (steadyWhereLit(dial)) return graded('suitable');
  const positions = byPosition(dial);
  const top = positions[positions.length - 1];
  const from = steadyFrom(positions);
  if (top !== undefined && from !== null && top.position - from >= LEAST_STEADY_RANGE) {
    return graded('conditional', [
      {
        kind: 'lowest-dial',
        position: from,
        detail: `Steady from ${from} % of the dial up, provided that its low-end trim is set so that it cannot go lower.`,
      },
    ]);
  }
  return graded(dial.some((r) => r.state === 'undecided') ? 'undetermined' : 'unsuitable');
}
