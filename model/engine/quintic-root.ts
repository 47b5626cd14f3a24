/** The first guess at where a monotone quantity passes a bound, from what is known of it at both ends of a step. */

/** share of the step at which the guess is good enough: the Newton iteration that follows squares what is left */
const ENOUGH = 1e-5;

/** values, slopes and curvatures at 0 and at 1. Handed over in an array: a call with six numbers would put each of them on the heap */
export const ends = new Float64Array(6);

/** where between 0 and 1 the quintic with these ends passes zero, having fallen from a value above to one below */
export function quinticRoot(): number {
  const f0 = ends[0] as number;
  const f1 = ends[1] as number;
  const slope0 = ends[2] as number;
  const slope1 = ends[3] as number;
  const bend0 = ends[4] as number;
  const bend1 = ends[5] as number;
  const rise = f1 - f0 - slope0 - bend0 / 2;
  const turn = slope1 - slope0 - bend0;
  const bend = bend1 - bend0;
  const c3 = 10 * rise - 4 * turn + bend / 2;
  const c4 = -15 * rise + 7 * turn - bend;
  const c5 = 6 * rise - 3 * turn + bend / 2;
  let lo = 0;
  let hi = 1;
  let u = f0 / (f0 - f1);
  for (let k = 0; k < 8; k++) {
    const value = f0 + u * (slope0 + u * (bend0 / 2 + u * (c3 + u * (c4 + u * c5))));
    if (value > 0) lo = u;
    else hi = u;
    const next = u - value / (slope0 + u * (bend0 + u * (3 * c3 + u * (4 * c4 + u * 5 * c5))));
    const kept = next > lo && next < hi ? next : (lo + hi) / 2;
    if (Math.abs(kept - u) < ENOUGH) return kept;
    u = kept;
  }
  return u;
}
