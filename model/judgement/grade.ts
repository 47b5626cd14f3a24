/** Grades one corner's dial rows: suitable, conditional on a lowest dial setting, unsuitable, or undetermined where it could not be decided. */
import type { Pairing } from '../pairing.ts';
import { LEAST_STEADY_RANGE } from '../tolerances.ts';
import type { Condition, DialRow, Grade, PopOn, Reason } from '../verdict.ts';
import { ratingReasons } from './ratings.ts';
import { dialReasons } from './reasons.ts';
import { byPosition, popOn, steadyFrom, steadyWhereLit } from './steady-range.ts';
import { undecidedHint } from './undecided-hint.ts';

export interface CornerGrade {
  readonly grade: Grade;
  readonly conditions: readonly Condition[];
  readonly reasons: readonly Reason[];
  readonly popOn: PopOn;
}

/** lowest position of a steady range that reaches the top of the dial and is wide enough to be of use; null where there is none */
function usefullySteadyFrom(dial: readonly DialRow[]): number | null {
  const positions = byPosition(dial);
  const top = positions[positions.length - 1];
  const from = steadyFrom(positions);
  return top !== undefined && from !== null && top.position - from >= LEAST_STEADY_RANGE ? from : null;
}

/** whether the rows could still be good enough if every undecided one were steady */
function mayRun(dial: readonly DialRow[]): boolean {
  const hoped = dial.map((r): DialRow => (r.state === 'undecided' ? { ...r, state: 'steady' } : r));
  return steadyWhereLit(hoped) || usefullySteadyFrom(hoped) !== null;
}

export function lowestDialCondition(position: number): Condition {
  return {
    kind: 'lowest-dial',
    position,
    detail: `Steady from ${position} % of the dial up, provided that its low-end trim is set so that it cannot go lower.`,
  };
}

export function gradeDial(pairing: Pairing, dial: readonly DialRow[]): CornerGrade {
  const pop = popOn(dial);
  const ratings = ratingReasons(pairing, dial);
  const hint = undecidedHint(pairing);
  const told = dialReasons(dial, pop).map((r) => (r.code === 'undecided' ? { ...r, detail: `${r.detail}${hint}` } : r));
  const reasons = [...ratings, ...told];
  const graded = (grade: Grade, conditions: readonly Condition[] = []): CornerGrade => ({ grade, conditions, reasons, popOn: pop });
  if (ratings.length > 0) return graded('unsuitable');
  if (steadyWhereLit(dial)) return graded('suitable');
  const from = usefullySteadyFrom(dial);
  if (from !== null) return graded('conditional', [lowestDialCondition(from)]);
  return graded(dial.some((r) => r.state === 'undecided') && mayRun(dial) ? 'undetermined' : 'unsuitable');
}
