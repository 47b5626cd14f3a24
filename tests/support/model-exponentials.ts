/**
 * Integrals of what happens within one visit to one mode, worked out again for the tests: every quantity is a row over the mode's
 * coordinates (reals, pairs, the mains' cosine and sine) plus a constant, hence a sum of exponentials of the time since the visit began.
 */
import type { Mode } from '../../model/engine/mode.ts';

/** shares of the coordinates, the constant last */
export type CoordinateRow = Float64Array;

/** (e^x - 1)/x for a complex x, times `duration` */
function growth(re: number, im: number, duration: number): [number, number] {
  const [xRe, xIm] = [re * duration, im * duration];
  const square = xRe * xRe + xIm * xIm;
  if (square < 1e-4) {
    // series to the sixth order: 1e-14 at |x| = 0.01
    let [sumRe, sumIm, termRe, termIm] = [1, 0, 1, 0];
    for (let k = 2; k <= 7; k++) {
      [termRe, termIm] = [(termRe * xRe - termIm * xIm) / k, (termRe * xIm + termIm * xRe) / k];
      sumRe += termRe;
      sumIm += termIm;
    }
    return [sumRe * duration, sumIm * duration];
  }
  const half = Math.sin(xIm / 2);
  const size = Math.exp(xRe);
  // e^x - 1 without cancellation
  const aRe = Math.expm1(xRe) - 2 * size * half * half;
  const aIm = size * Math.sin(xIm);
  return [((aRe * xRe + aIm * xIm) / square) * duration, ((aIm * xRe - aRe * xIm) / square) * duration];
}

export class Visit {
  private readonly mode: Mode;
  private readonly z: Float64Array;
  readonly duration: number;
  private readonly terms: number;
  private readonly decay: number[];
  private readonly rotation: number[];
  private sums: [number, number, number, number][] | null = null;

  constructor(mode: Mode, coordinates: Float64Array, duration: number) {
    this.mode = mode;
    this.z = Float64Array.from(coordinates);
    this.duration = duration;
    const { modal } = mode.linear;
    const count = modal.reals + modal.pairs;
    // the mains and the constant count as terms too
    this.terms = count + 2;
    this.decay = [...modal.decay.subarray(0, count), 0, 0];
    this.rotation = [...modal.rotation.subarray(0, count), mode.linear.rotation[count] as number, 0];
  }

  private amplitudes(row: CoordinateRow): Float64Array {
    const { reals } = this.mode.linear.modal;
    const c = new Float64Array(2 * this.terms);
    for (let t = 0; t < this.terms - 1; t++) {
      const k = t < reals ? t : reals + 2 * (t - reals);
      const [a, b] = [row[k] as number, t < reals ? 0 : (row[k + 1] as number)];
      const [re, im] = [this.z[k] as number, t < reals ? 0 : (this.z[k + 1] as number)];
      c[2 * t] = a * re + b * im;
      c[2 * t + 1] = a * im - b * re;
    }
    c[2 * (this.terms - 1)] = row[row.length - 1] as number;
    return c;
  }

  value(row: CoordinateRow, time: number): number {
    const c = this.amplitudes(row);
    let sum = 0;
    for (let t = 0; t < this.terms; t++) {
      const angle = (this.rotation[t] as number) * time;
      const size = Math.exp((this.decay[t] as number) * time);
      sum += size * ((c[2 * t] as number) * Math.cos(angle) - (c[2 * t + 1] as number) * Math.sin(angle));
    }
    return sum;
  }

  integral(row: CoordinateRow): number {
    const c = this.amplitudes(row);
    let sum = 0;
    for (let t = 0; t < this.terms; t++) {
      const [re, im] = growth(this.decay[t] as number, this.rotation[t] as number, this.duration);
      sum += (c[2 * t] as number) * re - (c[2 * t + 1] as number) * im;
    }
    return sum;
  }

  productIntegral(first: CoordinateRow, second: CoordinateRow): number {
    this.sums ??= Array.from({ length: this.terms ** 2 }, (_, at) => {
      const [i, j] = [Math.floor(at / this.terms), at % this.terms];
      const decay = (this.decay[i] as number) + (this.decay[j] as number);
      const [p, q] = [this.rotation[i] as number, this.rotation[j] as number];
      return [...growth(decay, p + q, this.duration), ...growth(decay, p - q, this.duration)];
    });
    const [c, d] = [this.amplitudes(first), this.amplitudes(second)];
    let sum = 0;
    for (let i = 0; i < this.terms; i++) {
      const [cr, ci] = [c[2 * i] as number, c[2 * i + 1] as number];
      if (cr === 0 && ci === 0) continue;
      for (let j = 0; j < this.terms; j++) {
        const [dr, di] = [d[2 * j] as number, d[2 * j + 1] as number];
        const [sRe, sIm, tRe, tIm] = this.sums[i * this.terms + j] as [number, number, number, number];
        // Re(a) Re(b) = Re(a b + a conj b)/2
        sum += (cr * dr - ci * di) * sRe - (cr * di + ci * dr) * sIm + (cr * dr + ci * di) * tRe - (ci * dr - cr * di) * tIm;
      }
    }
    return sum / 2;
  }
}
