/**
 * One visit to one mode, after the fact: values, integrals and peaks of its outputs in closed form. Every output is
 *   y(s) = Re sum c_i exp(lambda_i s), 0 <= s <= duration,
 * so integrals of y and of products of two outputs are sums of exponentials too; nothing is sampled but the search for a peak.
 */
import { PEAK_TIME, PEAK_TOLERANCE, RING_FADED } from '../tolerances.ts';
import type { Mode } from './mode.ts';

/** most terms of an output, the constant among them */
const MOST_TERMS = 96;

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
/** scratch: amplitudes of up to two outputs at a time, and the pair sums of the segment they were last taken for */
const firstAmplitudes = new Float64Array(2 * MOST_TERMS);
const secondAmplitudes = new Float64Array(2 * MOST_TERMS);
const pairSums = new Float64Array(4 * MOST_TERMS * MOST_TERMS);
const factorRe = new Float64Array(MOST_TERMS);
const factorIm = new Float64Array(MOST_TERMS);
let pairSumsOf: Segment | null = null;

export class Segment {
  readonly mode: Mode;
  readonly halfCycle: number;
  /** s after the half-cycle's zero crossing */
  readonly start: number;
  readonly duration: number;
  private readonly coordinates: Float64Array;

  constructor(mode: Mode, coordinates: Float64Array, start: number, duration: number, halfCycle: number) {
    this.mode = mode;
    this.coordinates = coordinates.slice(0, mode.linear.coordinates);
    this.start = start;
    this.duration = duration;
    this.halfCycle = halfCycle;
  }

  /** complex amplitudes of an output: [re, im] per term, the constant last */
  private amplitudes(output: number, c: Float64Array): Float64Array {
    const { linear, restOutput } = this.mode;
    const { reals } = linear.modal;
    const z = this.coordinates;
    const row = output * linear.outputStride;
    for (let t = 0; t < reals; t++) {
      c[2 * t] = (linear.outputRows[row + t] as number) * (z[t] as number);
      c[2 * t + 1] = 0;
    }
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
    c[2 * linear.terms + 1] = 0;
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
    return this.valueOf(this.amplitudes(output, firstAmplitudes), s);
  }

  /** the same for many times */
  reader(output: number): (s: number) => number {
    const amplitudes = this.amplitudes(output, new Float64Array(2 * (this.mode.linear.terms + 1)));
    return (s) => this.valueOf(amplitudes, s);
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
    const c = this.amplitudes(output, firstAmplitudes);
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
  private takePairSums(): void {
    if (pairSumsOf === this) return;
    pairSumsOf = this;
    const count = this.mode.linear.terms + 1;
    for (let t = 0; t < count; t++) {
      const size = Math.exp(this.decay(t) * this.duration);
      factorRe[t] = size * Math.cos(this.rotation(t) * this.duration);
      factorIm[t] = size * Math.sin(this.rotation(t) * this.duration);
    }
    for (let i = 0; i < count; i++) {
      for (let j = 0; j < count; j++) {
        const at = 4 * (i * count + j);
        for (const mirrored of [1, -1]) {
          const re = (factorRe[i] as number) * (factorRe[j] as number) - mirrored * (factorIm[i] as number) * (factorIm[j] as number);
          const im = (factorIm[i] as number) * (factorRe[j] as number) + mirrored * (factorRe[i] as number) * (factorIm[j] as number);
          growthIntegral(pairResult, this.decay(i) + this.decay(j), this.rotation(i) + mirrored * this.rotation(j), re, im, this.duration);
          const slot = mirrored === 1 ? at : at + 2;
          pairSums[slot] = pairResult[0] as number;
          pairSums[slot + 1] = pairResult[1] as number;
        }
      }
    }
  }

  /** integral of the product of two outputs over the segment */
  productIntegral(first: number, second: number): number {
    const count = this.mode.linear.terms + 1;
    this.takePairSums();
    const sums = pairSums;
    const c = this.amplitudes(first, firstAmplitudes);
    const d = first === second ? c : this.amplitudes(second, secondAmplitudes);
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
    return this.largest(output, -1, this.largest(output, 1, least));
  }

  /** largest sign * output between two times after the segment's start if it exceeds `least`, else `least`; tolerance as for `peak` */
  largest(output: number, sign: 1 | -1, least: number, from = 0, to = this.duration): number {
    const c = this.amplitudes(output, firstAmplitudes);
    return this.searchLargest(c, sign, least, from, to, sign * this.valueOf(c, from), sign * this.valueOf(c, to));
  }

  /** halves the interval until no curvature left in it could carry the output above what has been seen (the bound is ModeWalk's) */
  private searchLargest(c: Float64Array, sign: 1 | -1, least: number, a: number, b: number, yA: number, yB: number): number {
    const { linear } = this.mode;
    const best = Math.max(least, yA, yB);
    const h = b - a;
    if (h < PEAK_TIME) return best;
    let stray = 0;
    let fast = 0;
    for (let t = 0; t < linear.terms; t++) {
      const d = linear.decay[t] as number;
      const q = linear.rotation[t] as number;
      const re = c[2 * t] as number;
      const im = c[2 * t + 1] as number;
      const size = Math.sqrt(re * re + im * im) * Math.exp(d * (d > 0 ? b : a));
      const bend = ((d * d + q * q) * h * h) / 8;
      if (bend < 1) stray += size * bend;
      else fast += 2 * size;
    }
    const d = yB - yA;
    const most = Math.abs(d) >= 4 * stray ? Math.max(yA, yB) : (yA + yB) / 2 + stray + (d * d) / (16 * stray);
    if (most + fast <= best + PEAK_TOLERANCE * Math.abs(best)) return best;
    const middle = (a + b) / 2;
    const y = sign * this.valueOf(c, middle);
    return this.searchLargest(c, sign, this.searchLargest(c, sign, best, a, middle, yA, y), middle, b, y, yB);
  }

  /** times after the segment's start that resolve its output: `perPeriod` a period of each ring while the ring lives, and at least that
   * many altogether */
  sampleTimes(perPeriod: number): number[] {
    const { rotation, decay, terms } = this.mode.linear;
    const times: number[] = [];
    let at = 0;
    while (at < this.duration) {
      times.push(at);
      let fastest = 0;
      for (let t = 0; t < terms; t++) {
        const faded = -(decay[t] as number) * at > RING_FADED;
        if (!faded && (rotation[t] as number) > fastest) fastest = rotation[t] as number;
      }
      at += Math.min(this.duration, (2 * Math.PI) / fastest) / perPeriod;
    }
    times.push(this.duration);
    return times;
  }
}
