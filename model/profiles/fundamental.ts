/**
 * The fundamental of a sampled wave: offset, amplitude, frequency and phase of the sine that leaves the least. Found by least squares
 * over the whole record, so that noise near a zero crossing moves nothing.
 */
import { COARSE_SAMPLES, HIGHEST_SEARCHED } from './profile-tolerances.ts';

export interface Fundamental {
  readonly frequency: number;
  readonly amplitude: number;
  /** value(t) = offset + amplitude sin(2 pi frequency t + phase), rad */
  readonly phase: number;
  readonly offset: number;
  /** r.m.s. of what is left over the r.m.s. of the sine */
  readonly distortion: number;
}

/** samples per period of the highest frequency searched that the coarse search looks at */
const SAMPLES_A_PERIOD = 5;
/** a coarse step moves the phase at the record's end by a fifth of a turn: no peak lies between two steps unseen */
const COARSE_STEP = 0.2;
/** of a golden-section search: a coarse step narrowed to a ten-millionth */
const ROUNDS = 34;
const GOLDEN = (Math.sqrt(5) - 1) / 2;

/** least squares of offset + sine at one frequency over every `stride`-th of the first `length` samples; rotating a phasor spares the trigonometry */
function fitAt(
  values: ArrayLike<number>,
  step: number,
  frequency: number,
  stride: number,
  length: number,
): Fundamental & { readonly left: number } {
  const turn = 2 * Math.PI * frequency * step * stride;
  const count = Math.floor((length - 1) / stride) + 1;
  let s = 0;
  let c = 1;
  let [sumS, sumC, sumSS, sumCC, sumSC, sumY, sumYS, sumYC, sumYY] = [0, 0, 0, 0, 0, 0, 0, 0, 0];
  const [turnS, turnC] = [Math.sin(turn), Math.cos(turn)];
  for (let k = 0; k < count; k++) {
    // rounding of the rotation adds up slowly; started afresh before it matters
    if (k % 256 === 0) [s, c] = [Math.sin(k * turn), Math.cos(k * turn)];
    const y = values[k * stride] as number;
    sumS += s;
    sumC += c;
    sumSS += s * s;
    sumCC += c * c;
    sumSC += s * c;
    sumY += y;
    sumYS += y * s;
    sumYC += y * c;
    sumYY += y * y;
    const next = s * turnC + c * turnS;
    c = c * turnC - s * turnS;
    s = next;
  }
  const ss = sumSS - (sumS * sumS) / count;
  const cc = sumCC - (sumC * sumC) / count;
  const sc = sumSC - (sumS * sumC) / count;
  const ys = sumYS - (sumY * sumS) / count;
  const yc = sumYC - (sumY * sumC) / count;
  const determinant = ss * cc - sc * sc || Number.MIN_VALUE;
  const a = (ys * cc - yc * sc) / determinant;
  const b = (yc * ss - ys * sc) / determinant;
  const offset = (sumY - a * sumS - b * sumC) / count;
  const left = Math.max(0, sumYY - (sumY * sumY) / count - a * ys - b * yc) / count;
  const amplitude = Math.hypot(a, b);
  return {
    frequency,
    amplitude,
    phase: Math.atan2(b, a),
    offset,
    distortion: Math.sqrt((2 * left) / (amplitude ** 2 || Number.MIN_VALUE)),
    left,
  };
}

/** the best frequency within a coarse step of the given one, over the first `count` samples */
function refined(values: ArrayLike<number>, step: number, near: number, count: number): ReturnType<typeof fitAt> {
  const reach = COARSE_STEP / (count * step);
  let from = Math.max(0.5 * near, near - reach);
  let to = near + reach;
  const at = (share: number): ReturnType<typeof fitAt> => fitAt(values, step, from + share * (to - from), 1, count);
  let lower = at(1 - GOLDEN);
  let upper = at(GOLDEN);
  for (let round = 0; round < ROUNDS; round++) {
    if (lower.left <= upper.left) {
      to = upper.frequency;
      upper = lower;
      lower = at(1 - GOLDEN);
    } else {
      from = lower.frequency;
      lower = upper;
      upper = at(GOLDEN);
    }
  }
  return lower.left <= upper.left ? lower : upper;
}

/** `step` s between samples; the record must hold about a period */
export function fitFundamental(values: ArrayLike<number>, step: number): Fundamental {
  const high = Math.min(HIGHEST_SEARCHED, 0.4 / step);
  const stride = Math.max(1, Math.floor(1 / (high * SAMPLES_A_PERIOD * step)));
  let count = Math.min(values.length, stride * COARSE_SAMPLES);
  const low = 0.7 / (count * step);
  let best = fitAt(values, step, low, stride, count);
  for (let f = low; f <= high; f += COARSE_STEP / (count * step)) {
    const tried = fitAt(values, step, f, stride, count);
    if (tried.left < best.left) best = tried;
  }
  // ever longer stretches: each narrows the frequency to well within the next one's reach
  for (;;) {
    best = refined(values, step, best.frequency, count);
    if (count === values.length) return best;
    count = Math.min(values.length, 4 * count);
  }
}
