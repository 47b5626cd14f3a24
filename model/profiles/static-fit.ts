/**
 * Fits the static form to a phase table: i = g(|v|) sign(v) + C dv/dt, with v behind the series resistor and g made of straight
 * lines from 0 V on. For given bends that is linear least squares; the bends are added one by one where they help most, then moved.
 * The part that is even about 90 degrees can only go to g, the odd part only to C.
 */
import type { IvPoint } from '../pairing.ts';
import { BRIDGE_DROP } from '../tolerances.ts';
import { solveNotNegative } from './least-squares.ts';
import { type PhaseTable, pointWeights } from './phase-table.ts';
import { GOOD_ENOUGH, KNOT_OVERSHOOT, KNOT_PENALTY, KNOT_PLACES, LEAST_CAPACITANCE, MOST_KNOTS } from './profile-tolerances.ts';

export interface StaticFit {
  readonly capacitance: number;
  readonly points: readonly IvPoint[];
}

interface Samples {
  /** V at the bridge output, 0 where it blocks */
  readonly behind: Float64Array;
  /** A in the voltage's own polarity, and what one farad would add to it */
  readonly current: Float64Array;
  readonly perFarad: Float64Array;
  readonly weight: Float64Array;
  readonly top: number;
  /** A, the largest recorded current */
  readonly most: number;
}

interface Solution {
  readonly knots: readonly number[];
  /** current at each knot, then the capacitance over `scale` */
  readonly values: Float64Array;
  readonly squaredError: number;
}

function samplesOf(table: PhaseTable, seriesResistance: number): Samples {
  const peak = table.voltage * Math.SQRT2;
  const omega = 2 * Math.PI * table.frequency;
  const n = table.points.length;
  const behind = new Float64Array(n);
  const current = new Float64Array(n);
  const perFarad = new Float64Array(n);
  table.points.forEach(({ phase, current: i }, k) => {
    const angle = (phase * Math.PI) / 180;
    const sign = Math.sin(angle) < -1e-9 ? -1 : 1;
    behind[k] = Math.max(0, sign * (peak * Math.sin(angle) - seriesResistance * i) - BRIDGE_DROP);
    current[k] = sign * i;
    // in units of the whole current that the mains drives through 1 uF, so that the columns are of one size
    perFarad[k] = sign * Math.cos(angle) * omega * peak * 1e-6;
  });
  const largest = (of: Float64Array): number => of.reduce((a, b) => Math.max(a, b), 0);
  return { behind, current, perFarad, weight: pointWeights(table), top: largest(behind), most: largest(current) };
}

/** knots[0] is 0 V, where g is 0; the last is the highest voltage seen */
function solve(samples: Samples, knots: readonly number[]): Solution {
  const { behind, current, perFarad, weight } = samples;
  const size = knots.length;
  const capacitor = size - 1;
  const matrix = new Float64Array(size * size);
  const right = new Float64Array(size);
  const column = new Int32Array(3);
  const factor = new Float64Array(3);
  const place = (k: number): void => {
    const u = behind[k] as number;
    let j = 1;
    while (j < knots.length - 1 && (knots[j] as number) < u) j++;
    const low = knots[j - 1] as number;
    const share = (u - low) / ((knots[j] as number) - low);
    column[0] = j - 2;
    factor[0] = 1 - share;
    column[1] = j - 1;
    factor[1] = share;
    column[2] = capacitor;
    factor[2] = perFarad[k] as number;
  };
  for (let k = 0; k < behind.length; k++) {
    place(k);
    const w = weight[k] as number;
    for (let a = 0; a < 3; a++) {
      const row = column[a] as number;
      if (row < 0) continue;
      right[row] = (right[row] as number) + w * (factor[a] as number) * (current[k] as number);
      for (let b = 0; b < 3; b++) {
        const c = column[b] as number;
        if (c >= 0) matrix[row * size + c] = (matrix[row * size + c] as number) + w * (factor[a] as number) * (factor[b] as number);
      }
    }
  }
  const values = solveNotNegative(matrix, right, size);
  let squaredError = 0;
  for (let k = 0; k < behind.length; k++) {
    place(k);
    let error = -(current[k] as number);
    for (let a = 0; a < 3; a++) if ((column[a] as number) >= 0) error += (factor[a] as number) * (values[column[a] as number] as number);
    squaredError += (weight[k] as number) * error * error;
  }
  return { knots, values, squaredError };
}

function withKnot(knots: readonly number[], added: number): number[] {
  return [...knots, added].sort((a, b) => a - b);
}

/** whether the record bears these knots out: a point inside every stretch between two of them, and no peak that lies between points */
function bornOut({ behind, most }: Samples, { knots, values }: Solution): boolean {
  const filled = new Set<number>();
  for (const u of behind) filled.add(knots.findIndex((knot, k) => u > knot && u < (knots[k + 1] ?? 0)));
  filled.delete(-1);
  if (filled.size < knots.length - 1) return false;
  return values.subarray(0, knots.length - 1).every((i) => i <= most * (1 + KNOT_OVERSHOOT));
}

/** the best single knot to add, or null where none of the places is free */
function bestAddition(samples: Samples, now: Solution, places: readonly number[], apart: number): Solution | null {
  let best: Solution | null = null;
  for (const place of places) {
    if (now.knots.some((k) => Math.abs(k - place) < apart)) continue;
    const tried = solve(samples, withKnot(now.knots, place));
    if (!bornOut(samples, tried)) continue;
    if (best === null || tried.squaredError < best.squaredError) best = tried;
  }
  return best;
}

/** moves each inner knot by ever smaller steps as long as that helps */
function moved(samples: Samples, from: Solution, grid: number): Solution {
  let best = from;
  for (let step = grid / 2; step > grid / 40; step /= 2) {
    for (let k = 1; k < best.knots.length - 1; k++) {
      for (const by of [-step, step]) {
        const at = (best.knots[k] as number) + by;
        if (at <= (best.knots[k - 1] as number) + grid / 20 || at >= (best.knots[k + 1] as number) - grid / 20) continue;
        const tried = solve(
          samples,
          best.knots.map((knot, j) => (j === k ? at : knot)),
        );
        if (tried.squaredError < best.squaredError && bornOut(samples, tried)) best = tried;
      }
    }
  }
  return best;
}

/** without the knots that others have made needless since they were added */
function pruned(samples: Samples, from: Solution, allowed: number): Solution {
  let now = from;
  for (;;) {
    const fewer = now.knots
      .slice(1, -1)
      .map((knot) =>
        solve(
          samples,
          now.knots.filter((k) => k !== knot),
        ),
      )
      .filter((tried) => bornOut(samples, tried));
    const best = fewer.toSorted((a, b) => a.squaredError - b.squaredError)[0];
    if (best === undefined || best.squaredError > allowed) return now;
    now = best;
  }
}

export function fitStatic(table: PhaseTable, seriesResistance: number): StaticFit {
  const samples = samplesOf(table, seriesResistance);
  const { top, weight, current } = samples;
  const n = table.points.length;
  const grid = top / KNOT_PLACES;
  const places = Array.from({ length: KNOT_PLACES - 1 }, (_, k) => (k + 1) * grid);
  // half as many unknowns as there are different voltages, or the points would be followed one by one
  const most = Math.min(MOST_KNOTS, Math.floor(new Set(samples.behind.map((u) => Math.round((u / top) * 1000))).size / 2));
  let enough = 0;
  for (let k = 0; k < n; k++) enough += (weight[k] as number) * (current[k] as number) ** 2;
  enough *= GOOD_ENOUGH ** 2;
  let now = solve(samples, [0, top]);
  while (now.squaredError > enough && now.knots.length < most) {
    const next = bestAddition(samples, now, places, grid / 2);
    if (next === null) break;
    const better = moved(samples, next, grid);
    if (n * Math.log(now.squaredError / Math.max(better.squaredError, 1e-300)) < KNOT_PENALTY * Math.log(n)) break;
    now = better;
  }
  const worthAKnot = n ** (KNOT_PENALTY / n);
  now = moved(samples, pruned(samples, now, Math.max(enough, now.squaredError * worthAKnot)), grid);
  const capacitance = (now.values[now.knots.length - 1] as number) * 1e-6;
  return {
    capacitance: capacitance < LEAST_CAPACITANCE ? 0 : capacitance,
    points: now.knots.map((voltage, k) => ({ voltage, current: k === 0 ? 0 : Math.min(now.values[k - 1] as number, samples.most) })),
  };
}
