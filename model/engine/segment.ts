/**
 * One visit to one mode, after the fact: values, integrals and peaks of its outputs in closed form. Every output is
 *   y(s) = Re sum c_i exp(lambda_i s), 0 <= s <= duration,
 * so integrals of y and of products of two outputs are sums of exponentials too; nothing is sampled but the search for a peak.
 */
import { PEAK_TOLERANCE } from '../tolerances.ts';
import type { Mode } from './mode.ts';

/** (exp(mu T) - 1)/mu given exp(mu T), into [re, im] of `out` */
function growthIntegral(out: Float64Array, muRe: number, muIm: number, eRe: number, eIm: number, duration: number): void {
  const square = muRe * muRe + muIm * muIm;
  if (square * duration * duration < 1e-10) {
    out[0] = duration * (1 + (muRe * duration) / 2);
    out[1] = (duration * muIm * duration) / 2;
    return;
  }
  const a = eRe - 1;
  out[0] = (a * muRe + eIm * muIm) / square;
  out[1] = (eIm * muRe - a * muIm) / square;
}

const pairResult = new Float64Array(2);

export class Segment {
  readonly mode: Mode;
  readonly halfCycle: number;
  /** s after the half-cycle's zero crossing */
  readonly start: number;
  readonly duration: number;
  private readonly coordinates: Float64Array;
  private sums: Float64Array | null = null;

  constructor(mode: Mode, coordinates: Float64Array, start: number, duration: number, halfCycle: number) {
    this.mode = mode;
    this.coordinates = Float64Array.from(coordinates.subarray(0, mode.linear.coordinates));
    this.start = start;
    this.duration = duration;
    this.halfCycle = halfCycle;
  }

  /** complex amplitudes of an output: [re, im] per term, the constant last */
  private amplitudes(output: number): Float64Array {
    const { linear, restOutput } = this.mode;
    const { reals } = linear.modal;
    const z = this.coordinates;
    const c = new Float64Array(2 * (linear.terms + 1));
    const row = output * linear.outputStride;
    for (let t = 0; t < reals; t++) c[2 * t] = (linear.outputRows[row + t] as number) * (z[t] as number);
    for (let t = reals; t < linear.terms; t++) {
      const k = reals + 2 * (t - reals);
      const at = row + reals + 3 * (t - reals);
      const a = linear.outputRows[at] as number;
      const b = linear.outputRows[at + 1] as number;
      const re = z[k] as number;
      const im = z[k + 1] as number;
      c[2 * t] = a * re + b * im;
      c[2 * t + 1] = a * im - b * re;
    }
    c[2 * linear.terms] = restOutput[output] as number;
    return c;
  }

  private decay(term: number): number {
    return term === this.mode.linear.terms ? 0 : (this.mode.linear.decay[term] as number);
  }

  private rotation(term: number): number {
    return term === this.mode.linear.terms ? 0 : (this.mode.linear.rotation[term] as number);
  }

  /** value of an output at s after the segment's start */
  value(output: number, s: number): number {
    return this.valueOf(this.amplitudes(output), s);
  }

  private valueOf(c: Float64Array, s: number): number {
    let sum = 0;
    for (let t = 0; t <= this.mode.linear.terms; t++) {
      const angle = this.rotation(t) * s;
      sum += Math.exp(this.decay(t) * s) * ((c[2 * t] as number) * Math.cos(angle) - (c[2 * t + 1] as number) * Math.sin(angle));
    }
    return sum;
  }

  /** integral of an output over the segment */
  integral(output: number): number {
    const c = this.amplitudes(output);
    let sum = 0;
    for (let t = 0; t <= this.mode.linear.terms; t++) {
      const d = this.decay(t);
      const q = this.rotation(t);
      const size = Math.exp(d * this.duration);
      growthIntegral(pairResult, d, q, size * Math.cos(q * this.duration), size * Math.sin(q * this.duration), this.duration);
      sum += (c[2 * t] as number) * (pairResult[0] as number) - (c[2 * t + 1] as number) * (pairResult[1] as number);
    }
    return sum;
  }

  /** for each pair of terms the integrals of exp((l_i + l_j) s) and exp((l_i + conj l_j) s): [re, im, re, im] */
  private pairSums(): Float64Array {
    if (this.sums !== null) return this.sums;
    const count = this.mode.linear.terms + 1;
    const eRe = new Float64Array(count);
    const eIm = new Float64Array(count);
    for (let t = 0; t < count; t++) {
      const size = Math.exp(this.decay(t) * this.duration);
      eRe[t] = size * Math.cos(this.rotation(t) * this.duration);
      eIm[t] = size * Math.sin(this.rotation(t) * this.duration);
    }
    const sums = new Float64Array(4 * count * count);
    for (let i = 0; i < count; i++) {
      for (let j = 0; j < count; j++) {
        const at = 4 * (i * count + j);
        for (const mirrored of [1, -1]) {
          const re = (eRe[i] as number) * (eRe[j] as number) - mirrored * (eIm[i] as number) * (eIm[j] as number);
          const im = (eIm[i] as number) * (eRe[j] as number) + mirrored * (eRe[i] as number) * (eIm[j] as number);
          growthIntegral(pairResult, this.decay(i) + this.decay(j), this.rotation(i) + mirrored * this.rotation(j), re, im, this.duration);
          const slot = mirrored === 1 ? at : at + 2;
          sums[slot] = pairResult[0] as number;
          sums[slot + 1] = pairResult[1] as number;
        }
      }
    }
    this.sums = sums;
    return sums;
  }

  /** integral of the product of two outputs over the segment */
  productIntegral(first: number, second: number): number {
    const count = this.mode.linear.terms + 1;
    const sums = this.pairSums();
    const c = this.amplitudes(first);
    const d = first === second ? c : this.amplitudes(second);
    let sum = 0;
    for (let i = 0; i < count; i++) {
      const cr = c[2 * i] as number;
      const ci = c[2 * i + 1] as number;
      for (let j = 0; j < count; j++) {
        const dr = d[2 * j] as number;
        const di = d[2 * j + 1] as number;
        const at = 4 * (i * count + j);
        sum += (cr * dr - ci * di) * (sums[at] as number) - (cr * di + ci * dr) * (sums[at + 1] as number);
        sum += (cr * dr + ci * di) * (sums[at + 2] as number) - (ci * dr - cr * di) * (sums[at + 3] as number);
      }
    }
    return sum / 2;
  }

  /** largest |output| over the segment if it exceeds `least` (relative tolerance PEAK_TOLERANCE), else `least` */
  peak(output: number, least: number): number {
    const { terms } = this.mode.linear;
    const c = this.amplitudes(output);
    let best = least;
    const search = (from: number, to: number, yFrom: number, yTo: number): void => {
      best = Math.max(best, Math.abs(yFrom), Math.abs(yTo));
      const h = to - from;
      let stray = 0;
      for (let t = 0; t < terms; t++) {
        const d = this.decay(t);
        const speed = Math.hypot(d, this.rotation(t)) * h;
        const size = Math.hypot(c[2 * t] as number, c[2 * t + 1] as number) * Math.exp(d * (d > 0 ? to : from));
        stray += size * Math.min((speed * speed) / 8, 2);
      }
      if (Math.max(Math.abs(yFrom), Math.abs(yTo)) + stray <= best * (1 + PEAK_TOLERANCE) || h < 1e-9) return;
      const middle = (from + to) / 2;
      const y = this.valueOf(c, middle);
      search(from, middle, yFrom, y);
      search(middle, to, y, yTo);
    };
    search(0, this.duration, this.valueOf(c, 0), this.valueOf(c, this.duration));
    return best;
  }
}
