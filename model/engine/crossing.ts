/**
 * Locates a crossing: when a quantity that is monotone over a step passes a bound. A first guess from value, slope and curvature at both ends,
 * then Newton's iteration on the closed form, kept inside the bracket.
 */
import { EVENT_TIME } from '../tolerances.ts';
import { MOST_COORDINATES } from './eigen.ts';
import type { LinearMode } from './linear-mode.ts';
import { ends, quinticRoot } from './quintic-root.ts';

/** |lambda| times a time in which a factor turns and decays so little that four terms of its series are exact to rounding. The fastest decides,
 * for what does not show in the output that crosses is moved to the crossing too */
export const NUDGE = 2e-3;

/** scratch of the crossing that is being located: the output's parts, value and slope (or slope and curvature) */
export const parts = new Float64Array(3 * MOST_COORDINATES);
export const slopes = new Float64Array(2);
/** factors from the step's start to the crossing that was located last */
export const moved = new Float64Array(MOST_COORDINATES);

/** What is asked, filled in before `locateCrossing` (numbers as arguments would each be put on the heap): the output's value at the step's start
 * and end less its bound, positive inside the window; the output's constant part less the bound; 1 where the window is above the bound, -1
 * where it is below; how near the bound is near enough; the length of the step, s. */
export const asked = new Float64Array(6);
export const START = 0;
export const END = 1;
export const OFFSET = 2;
export const INSIDE = 3;
export const ENOUGH = 4;
export const SPAN = 5;

/** time (0, span] after the coordinates z at which the output with this row passes the bound, having been inside at z: into found[k] */
export function locateCrossing(linear: LinearMode, z: Float64Array, row: number, level: number, found: Float64Array, k: number): void {
  const { kernels, coordinates, decay, rotation, factors, outputRows } = linear;
  const offset = asked[OFFSET] as number;
  const inside = asked[INSIDE] as number;
  const enough = asked[ENOUGH] as number;
  const span = asked[SPAN] as number;
  let f0 = asked[START] as number;
  let f1 = asked[END] as number;
  kernels.takeApart(parts, slopes, z, decay, rotation, outputRows, row);
  const once = inside * span;
  const twice = once * span;
  ends[0] = f0;
  ends[1] = f1;
  ends[2] = (slopes[0] as number) * once;
  ends[4] = (slopes[1] as number) * twice;
  kernels.bendAfter(slopes, parts, factors, level * coordinates);
  ends[3] = (slopes[0] as number) * once;
  ends[5] = (slopes[1] as number) * twice;
  let at = span * quinticRoot();
  let lo = 0;
  let hi = span;
  // where the factors in `moved` belong
  let probed = Number.POSITIVE_INFINITY;
  const near = NUDGE / linear.fastest;
  for (let tries = 0; tries < 60; tries++) {
    if (!(at > lo && at < hi)) at = tries < 6 ? lo + ((hi - lo) * f0) / (f0 - f1) : (lo + hi) / 2;
    if (Math.abs(at - probed) < near) kernels.nudge(slopes, moved, parts, decay, rotation, at - probed);
    else kernels.probe(slopes, moved, parts, decay, rotation, at);
    probed = at;
    const f = ((slopes[0] as number) + offset) * inside;
    if (Math.abs(f) <= enough) {
      found[k] = at;
      return;
    }
    if (f > 0) {
      lo = at;
      f0 = f;
    } else {
      hi = at;
      f1 = f;
    }
    if (hi - lo <= EVENT_TIME) break;
    at = tries < 12 ? at - f / ((slopes[1] as number) * inside) : (lo + hi) / 2;
  }
  kernels.factorsAfter(moved, decay, rotation, hi);
  found[k] = hi;
}
