/**
 * One visit to one mode, after the fact: values, integrals and peaks of its outputs in closed form. Every output is
 *   y(s) = Re sum c_i exp(lambda_i s), 0 <= s <= duration,
 * so integrals of y and of products of two outputs are sums of exponentials too; nothing is sampled but the search for a peak.
 */
import { copied } from '../numbers.ts';
import { DIP_PIECES, PEAK_TIME, PEAK_TOLERANCE, RING_FADED } from '../tolerances.ts';
import { MOST_COORDINATES, MOST_STATES } from './eigen.ts';
import type { Mode } from './mode.ts';

/** most terms of an output: one for each state, the mains' and the constant */
const MOST_TERMS = MOST_STATES + 2;

/** scratch: up to two outputs taken apart, and what multiplies their slopes and curvatures, which nobody asks for here */
const firstParts = new Float64Array(3 * MOST_COORDINATES);
const secondParts = new Float64Array(3 * MOST_COORDINATES);
const slopes = new Float64Array(2);
/** their amplitudes c_i, the constant last */
const firstRe = new Float64Array(MOST_TERMS);
const firstIm = new Float64Array(MOST_TERMS);
const secondRe = new Float64Array(MOST_TERMS);
const secondIm = new Float64Array(MOST_TERMS);
/** sizes of an output's amplitudes at the segment's start */
const sizes = new Float64Array(MOST_TERMS);
/** of the segment that they were last taken for: exp(lambda_i duration), and for each pair i <= j of terms the integrals of
 * exp((l_i + l_j) s) and exp((l_i + conj l_j) s): re, im, re, im */
const factors = new Float64Array(MOST_COORDINATES);
const growthRe = new Float64Array(MOST_TERMS);
const growthIm = new Float64Array(MOST_TERMS);
const pairSums = new Float64Array(4 * MOST_TERMS * MOST_TERMS);
let factorsOf: Segment | null = null;
let pairSumsOf: Segment | null = null;

/** (exp(mu T) - 1)/mu given exp(mu T), into [re, im] at a place */
function putGrowthIntegral(into: Float64Array, at: number, muRe: number, muIm: number, eRe: number, eIm: number, duration: number): void {
  const square = muRe * muRe + muIm * muIm;
  if (square * duration * duration < 1e-10) {
    into[at] = duration * (1 + (muRe * duration) / 2);
    into[at + 1] = (duration * muIm * duration) / 2;
    return;
  }
  const a = eRe - 1;
  into[at] = (a * muRe + eIm * muIm) / square;
  into[at + 1] = (eIm * muRe - a * muIm) / square;
}

const integral = new Float64Array(2);

export class Segment {
  readonly mode: Mode;
  readonly halfCycle: number;
  /** s after the half-cycle's zero crossing */
  readonly start: number;
  readonly duration: number;
  private readonly coordinates: Float64Array;

  constructor(mode: Mode, coordinates: Float64Array, start: number, duration: number, halfCycle: number) {
    this.mode = mode;
    this.coordinates = copied(coordinates);
    this.start = start;
    this.duration = duration;
    this.halfCycle = halfCycle;
  }

  private takeApart(output: number, parts: Float64Array): void {
    const { kernels, decay, rotation, outputRows, outputStride } = this.mode.linear;
    kernels.takeApart(parts, slopes, this.coordinates, decay, rotation, outputRows, output * outputStride);
  }

  /** value of an output at s after the segment's start */
  value(output: number, s: number): number {
    this.takeApart(output, firstParts);
    return this.valueOf(output, s);
  }

  /** the same for the output that was last taken apart as the first */
  private valueOf(output: number, s: number): number {
    const { linear } = this.mode;
    return this.constantOf(output) + linear.kernels.valueAfter(firstParts, linear.decay, linear.rotation, s);
  }

  /** an output at many times after the segment's start, into `values` */
  sample(output: number, times: readonly number[], values: number[]): void {
    this.takeApart(output, firstParts);
    values.length = 0;
    for (let k = 0; k < times.length; k++) values.push(this.valueOf(output, times[k] as number));
  }

  private constantOf(output: number): number {
    return this.mode.rest[this.mode.linear.states + output] as number;
  }

  private takeFactors(): void {
    if (factorsOf === this) return;
    factorsOf = this;
    const { kernels, decay, rotation } = this.mode.linear;
    kernels.factorsAfter(factors, decay, rotation, this.duration);
  }

  /** integral of an output over the segment */
  integral(output: number): number {
    const { decay, rotation, modal, terms } = this.mode.linear;
    const { duration } = this;
    this.takeApart(output, firstParts);
    this.takeFactors();
    let sum = this.constantOf(output) * duration;
    for (let t = 0; t < terms; t++) {
      const k = t < modal.reals ? t : 2 * t - modal.reals;
      const isPair = t >= modal.reals;
      const eIm = isPair ? (factors[k + 1] as number) : 0;
      putGrowthIntegral(integral, 0, decay[t] as number, rotation[t] as number, factors[k] as number, eIm, duration);
      sum += (firstParts[k] as number) * (integral[0] as number);
      if (isPair) sum += (firstParts[k + 1] as number) * (integral[1] as number);
    }
    return sum;
  }

  private takePairSums(): void {
    if (pairSumsOf === this) return;
    pairSumsOf = this;
    this.takeFactors();
    const { decay, rotation, modal, terms } = this.mode.linear;
    const { reals } = modal;
    const { duration } = this;
    const count = terms + 1;
    for (let t = 0; t < terms; t++) {
      const k = t < reals ? t : 2 * t - reals;
      growthRe[t] = factors[k] as number;
      growthIm[t] = t < reals ? 0 : (factors[k + 1] as number);
    }
    growthRe[terms] = 1;
    growthIm[terms] = 0;
    for (let i = 0; i < count; i++) {
      const iIsReal = i < reals || i === terms;
      const di = i === terms ? 0 : (decay[i] as number);
      const qi = i === terms ? 0 : (rotation[i] as number);
      const ir = growthRe[i] as number;
      const ii = growthIm[i] as number;
      for (let j = i; j < count; j++) {
        const at = 4 * (i * count + j);
        const jIsReal = j < reals || j === terms;
        const d = di + (j === terms ? 0 : (decay[j] as number));
        const qj = j === terms ? 0 : (rotation[j] as number);
        const jr = growthRe[j] as number;
        const ji = growthIm[j] as number;
        putGrowthIntegral(pairSums, at, d, qi + qj, ir * jr - ii * ji, ii * jr + ir * ji, duration);
        if (jIsReal || iIsReal) {
          pairSums[at + 2] = pairSums[at] as number;
          pairSums[at + 3] = jIsReal ? (pairSums[at + 1] as number) : -(pairSums[at + 1] as number);
        } else putGrowthIntegral(pairSums, at + 2, d, qi - qj, ir * jr + ii * ji, ii * jr - ir * ji, duration);
      }
    }
  }

  /** amplitudes c_i of an output that was taken apart */
  private takeAmplitudes(output: number, parts: Float64Array, re: Float64Array, im: Float64Array): void {
    const { modal, terms } = this.mode.linear;
    const { reals } = modal;
    for (let t = 0; t < reals; t++) {
      re[t] = parts[t] as number;
      im[t] = 0;
    }
    for (let t = reals; t < terms; t++) {
      re[t] = parts[2 * t - reals] as number;
      im[t] = -(parts[2 * t - reals + 1] as number);
    }
    re[terms] = this.constantOf(output);
    im[terms] = 0;
  }

  /** integral of the product of two outputs over the segment */
  productIntegral(first: number, second: number): number {
    const count = this.mode.linear.terms + 1;
    this.takePairSums();
    this.takeApart(first, firstParts);
    this.takeAmplitudes(first, firstParts, firstRe, firstIm);
    const same = first === second;
    if (!same) {
      this.takeApart(second, secondParts);
      this.takeAmplitudes(second, secondParts, secondRe, secondIm);
    }
    const dRe = same ? firstRe : secondRe;
    const dIm = same ? firstIm : secondIm;
    let sum = 0;
    for (let i = 0; i < count; i++) {
      const ciRe = firstRe[i] as number;
      const ciIm = firstIm[i] as number;
      const diRe = dRe[i] as number;
      const diIm = dIm[i] as number;
      for (let j = i; j < count; j++) {
        const at = 4 * (i * count + j);
        const cjRe = firstRe[j] as number;
        const cjIm = firstIm[j] as number;
        const djRe = dRe[j] as number;
        const djIm = dIm[j] as number;
        // (c_i d_j + c_j d_i) times the first integral, (c_i conj d_j + conj c_j d_i) times the second
        const both =
          (ciRe * djRe - ciIm * djIm + cjRe * diRe - cjIm * diIm) * (pairSums[at] as number) -
          (ciRe * djIm + ciIm * djRe + cjRe * diIm + cjIm * diRe) * (pairSums[at + 1] as number) +
          (ciRe * djRe + ciIm * djIm + cjRe * diRe + cjIm * diIm) * (pairSums[at + 2] as number) -
          (ciIm * djRe - ciRe * djIm + cjRe * diIm - cjIm * diRe) * (pairSums[at + 3] as number);
        sum += i === j ? both / 2 : both;
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
    const { modal, terms, grows } = this.mode.linear;
    const { reals } = modal;
    this.takeApart(output, firstParts);
    let reach = 0;
    for (let t = 0; t < terms; t++) {
      const re = firstParts[t < reals ? t : 2 * t - reals] as number;
      const im = t < reals ? 0 : (firstParts[2 * t - reals + 1] as number);
      const size = Math.sqrt(re * re + im * im);
      sizes[t] = size;
      reach += size;
    }
    if (!grows && sign * this.constantOf(output) + reach <= least) return least;
    return this.searchLargest(output, sign, least, from, to, sign * this.valueOf(output, from), sign * this.valueOf(output, to));
  }

  /** halves the interval until no curvature left in it could carry the output above what has been seen (the bound is ModeWalk's) */
  private searchLargest(output: number, sign: 1 | -1, least: number, a: number, b: number, yA: number, yB: number): number {
    const { decay, rotation, terms } = this.mode.linear;
    const best = Math.max(least, yA, yB);
    const h = b - a;
    if (h < PEAK_TIME) return best;
    let stray = 0;
    let fast = 0;
    for (let t = 0; t < terms; t++) {
      const d = decay[t] as number;
      const q = rotation[t] as number;
      const size = (sizes[t] as number) * Math.exp(d * (d > 0 ? b : a));
      const bend = ((d * d + q * q) * h * h) / 8;
      if (bend < 1) stray += size * bend;
      else fast += 2 * size;
    }
    const d = yB - yA;
    const most = Math.abs(d) >= 4 * stray ? Math.max(yA, yB) : (yA + yB) / 2 + stray + (d * d) / (16 * stray);
    if (most + fast <= best + PEAK_TOLERANCE * Math.abs(best)) return best;
    const middle = (a + b) / 2;
    const y = sign * this.valueOf(output, middle);
    return this.searchLargest(output, sign, this.searchLargest(output, sign, best, a, middle, yA, y), middle, b, y, yB);
  }

  /** times after the segment's start that resolve its output, into `times`: `perPeriod` a period of each ring while the ring lives and
   * DIP_PIECES at least, and `perPeriod` altogether where none does */
  sampleTimes(perPeriod: number, times: number[]): void {
    const { rotation, decay, terms } = this.mode.linear;
    const mains = rotation[terms - 1] as number;
    times.length = 0;
    let at = 0;
    while (at < this.duration) {
      times.push(at);
      let fastest = mains;
      for (let t = 0; t < terms; t++) {
        const faded = -(decay[t] as number) * at > RING_FADED;
        if (!faded && (rotation[t] as number) > fastest) fastest = rotation[t] as number;
      }
      const most = this.duration / (fastest > mains ? DIP_PIECES : perPeriod);
      at += Math.min(most, (2 * Math.PI) / (fastest * perPeriod));
    }
    times.push(this.duration);
  }
}
