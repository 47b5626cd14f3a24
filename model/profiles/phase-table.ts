/**
 * A phase table: current against phase on an undimmed sine, with its checks and its weighted means. Points need not be evenly spaced,
 * so each stands for the stretch half-way to its neighbours.
 */
import { FEWEST_POINTS, MOST_POINTS } from './profile-tolerances.ts';
import type { Sine } from './undimmed-lamp.ts';

export interface PhasePoint {
  /** degrees from the voltage's rising zero crossing, rising strictly, over 0..180 or 0..360 */
  readonly phase: number;
  readonly current: number;
}

export interface PhaseTable extends Sine {
  readonly points: readonly PhasePoint[];
}

export function checkPhaseTable(table: PhaseTable): { readonly path: string; readonly message: string }[] {
  const issues: { path: string; message: string }[] = [];
  const { points } = table;
  for (const key of ['voltage', 'frequency'] as const) {
    if (!(Number.isFinite(table[key]) && table[key] > 0))
      issues.push({ path: key, message: `must be a finite number above 0, not ${table[key]}` });
  }
  if (points.length < FEWEST_POINTS || points.length > MOST_POINTS) {
    issues.push({ path: 'points', message: `must hold ${FEWEST_POINTS} to ${MOST_POINTS} points, not ${points.length}` });
    return issues;
  }
  points.forEach(({ phase, current }, k) => {
    const before = points[k - 1];
    if (!(phase >= 0 && phase <= 360))
      issues.push({ path: `points[${k}].phase`, message: `must lie within 0 to 360 degrees, not ${phase}` });
    if (before !== undefined && !(phase > before.phase)) {
      issues.push({ path: `points[${k}].phase`, message: `must be above the point before it (${before.phase} degrees)` });
    }
    if (!Number.isFinite(current)) issues.push({ path: `points[${k}].current`, message: `must be a finite number, not ${current}` });
  });
  if (issues.length > 0) return issues;
  const span = lastPhase(table) - (points[0] as PhasePoint).phase;
  const step = largestGap(points);
  // a millionth of a degree for the rounding of the division
  if (span + step < 180 - 1e-6)
    issues.push({ path: 'points', message: `must cover a half-cycle to within one sample, not ${span} degrees` });
  else if (points.every(({ current }) => current === 0)) issues.push({ path: 'points', message: 'must hold a current: every point is 0' });
  return issues;
}

function lastPhase({ points }: PhaseTable): number {
  return (points[points.length - 1] as PhasePoint).phase;
}

function largestGap(points: readonly PhasePoint[]): number {
  return points.reduce((most, p, k) => Math.max(most, p.phase - (points[k - 1] ?? p).phase), 0);
}

/** share of the record that each point stands for; they add up to 1 */
export function pointWeights(table: PhaseTable): Float64Array {
  const { points } = table;
  // the phase after which the record repeats itself (mirrored, for a half-cycle); a point at that very phase repeats the first
  const period = lastPhase(table) > 180 + 1e-6 ? 360 : 180;
  const at = points.map((p) => p.phase);
  const n = at.length;
  const first = at[0] as number;
  const last = at[n - 1] as number;
  // a record that ends somewhere in between does not close upon itself
  const closes = first + period - last < 2 * largestGap(points);
  const weights = Float64Array.from(at, (phase, k) => {
    const before = k > 0 ? (at[k - 1] as number) : closes ? last - period : phase;
    const after = k < n - 1 ? (at[k + 1] as number) : closes ? first + period : phase;
    return (after - phase) / 2 + (phase - before) / 2;
  });
  const sum = weights.reduce((a, b) => a + b, 0);
  return weights.map((w) => w / sum);
}

/** A r.m.s., W and the power factor of a table's points */
export function tableMeans(table: PhaseTable): { readonly rmsCurrent: number; readonly power: number; readonly powerFactor: number } {
  const weights = pointWeights(table);
  const peak = table.voltage * Math.SQRT2;
  let squared = 0;
  let power = 0;
  table.points.forEach(({ phase, current }, k) => {
    const w = weights[k] as number;
    squared += w * current ** 2;
    power += w * current * peak * Math.sin((phase * Math.PI) / 180);
  });
  const rmsCurrent = Math.sqrt(squared);
  return { rmsCurrent, power, powerFactor: rmsCurrent > 0 ? power / (table.voltage * rmsCurrent) : 0 };
}
