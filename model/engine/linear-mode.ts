/**
 * A mode: one configuration's linear system in modal coordinates, ready to be stepped. Between switchings the state is
 *   x(t) = basis * z(t) + (particular solution of the mains sine) + (constant particular solution),
 * where each modal coordinate only decays or rotates. The mains is carried as one more undamped pair (cos wt, sin wt), so every output
 * is one dot product with the coordinates plus a constant.
 *
 * Steps come from a ladder h = shortest * 2^level. For each level the mode holds the factor of every coordinate, and how far one
 * coordinate of unit size can stray from the chord over such a step: |lambda|^2 h^2 / 8 where that is small ("slow", a bound on the
 * curvature), or its whole range where it is not ("fast").
 */
import type { ModeSystem } from '../circuit/mode-system.ts';
import { numbers } from '../numbers.ts';
import { LADDER_LEVELS } from '../tolerances.ts';
import { MOST_STATES, type ModalBasis, modalBasis } from './eigen.ts';
import { type Kernels, kernelsFor } from './kernels.ts';

export const LEVELS = LADDER_LEVELS + 1;
/** largest |lambda| h that still counts as slow: there |lambda|^2 h^2 / 8 is 1, the range of a decaying coordinate */
export const SLOW_LIMIT = Math.sqrt(8);

/** what mirrored modes share */
export interface LinearMode {
  readonly states: number;
  readonly outputs: number;
  readonly modal: ModalBasis;
  /** coordinates: reals, pairs (re, im), mains (cos, sin) */
  readonly coordinates: number;
  /** terms: reals, pairs, mains: what has a size of its own */
  readonly terms: number;
  readonly decay: Float64Array;
  readonly rotation: Float64Array;
  /** per output: its share of each real coordinate, then for each pair its shares of re and im and the size of the two together */
  readonly outputRows: Float64Array;
  readonly outputStride: number;
  /** particular solution of the mains: x = driveCos * cos wt + driveSin * sin wt */
  readonly driveCos: Float64Array;
  readonly driveSin: Float64Array;
  /** constants x states, and constants x outputs */
  readonly constantStates: Float64Array;
  readonly constantOutputs: Float64Array;
  /** levels x coordinates (a pair: re, im of its factor) */
  readonly factors: Float64Array;
  /** levels x terms: curvature bound over 8 of a term of unit size where it is slow at that level, its whole range where it is fast */
  readonly bends: Float64Array;
  readonly ranges: Float64Array;
  /** |lambda| of each term, and the largest, 1/s */
  readonly speeds: Float64Array;
  readonly fastest: number;
  /** some coordinate grows (a falling lamp curve) */
  readonly grows: boolean;
  readonly kernels: Kernels;
}

/** sum over k < n of a[from + k * stride] * b[fromB + k * strideB] */
function dot(a: Float64Array, from: number, stride: number, b: Float64Array, fromB: number, strideB: number, n: number): number {
  let sum = 0;
  for (let k = 0, p = from, q = fromB; k < n; k++, p += stride, q += strideB) sum += (a[p] as number) * (b[q] as number);
  return sum;
}

/** scratch of the mode that is being made: a column in modal coordinates, the mains' answer in phase and a quarter before */
const b = new Float64Array(MOST_STATES);
const zRe = new Float64Array(MOST_STATES);
const zIm = new Float64Array(MOST_STATES);

/** modal coordinates of a column of the system, into b */
function takeInModes(system: ModeSystem, modal: ModalBasis, column: number): void {
  const n = system.states;
  for (let r = 0; r < n; r++) b[r] = dot(modal.inverse, r * n, 1, system.rows, column, system.columns, n);
}

/** states of modal coordinates, written from `to` on */
function toStates(modal: ModalBasis, z: Float64Array, n: number, into: Float64Array, to: number): void {
  for (let r = 0; r < n; r++) into[to + r] = dot(modal.basis, r * n, 1, z, 0, 1, n);
}

/**
 * Particular solution of the mains sine: (j omega - Lambda) Z = beta in real coordinates and 2 x 2 blocks; x = Im(X e^{j omega t}) =
 * Re X sin + Im X cos.
 */
function driveAnswer(system: ModeSystem, modal: ModalBasis, omega: number): { driveCos: Float64Array; driveSin: Float64Array } {
  const n = system.states;
  takeInModes(system, modal, n);
  for (let k = 0; k < modal.reals; k++) {
    const d = modal.decay[k] as number;
    const square = d * d + omega * omega;
    zRe[k] = (-d * (b[k] as number)) / square;
    zIm[k] = (-omega * (b[k] as number)) / square;
  }
  for (let p = 0; p < modal.pairs; p++) {
    const k = modal.reals + 2 * p;
    const d = modal.decay[modal.reals + p] as number;
    const q = modal.rotation[modal.reals + p] as number;
    const b1 = b[k] as number;
    const b2 = b[k + 1] as number;
    const detRe = d * d - omega * omega + q * q;
    const detIm = -2 * d * omega;
    const square = detRe * detRe + detIm * detIm;
    const firstRe = -d * b1 - q * b2;
    const secondRe = q * b1 - d * b2;
    zRe[k] = (firstRe * detRe + omega * b1 * detIm) / square;
    zIm[k] = (omega * b1 * detRe - firstRe * detIm) / square;
    zRe[k + 1] = (secondRe * detRe + omega * b2 * detIm) / square;
    zIm[k + 1] = (omega * b2 * detRe - secondRe * detIm) / square;
  }
  const driveSin = numbers(n);
  const driveCos = numbers(n);
  toStates(modal, zRe, n, driveSin, 0);
  toStates(modal, zIm, n, driveCos, 0);
  return { driveCos, driveSin };
}

/** particular solutions of the constants, constants x states */
function constantAnswers(system: ModeSystem, modal: ModalBasis): Float64Array {
  const n = system.states;
  const states = numbers(system.constants * n);
  for (let k = 0; k < system.constants; k++) {
    takeInModes(system, modal, n + 1 + k);
    for (let r = 0; r < modal.reals; r++) b[r] = (b[r] as number) === 0 ? 0 : -(b[r] as number) / (modal.decay[r] as number);
    for (let p = 0; p < modal.pairs; p++) {
      const r = modal.reals + 2 * p;
      const d = modal.decay[modal.reals + p] as number;
      const q = modal.rotation[modal.reals + p] as number;
      const c1 = b[r] as number;
      const c2 = b[r + 1] as number;
      b[r] = -(d * c1 + q * c2) / (d * d + q * q);
      b[r + 1] = -(d * c2 - q * c1) / (d * d + q * q);
    }
    toStates(modal, b, n, states, k * n);
  }
  return states;
}

export function linearMode(system: ModeSystem, omega: number, shortest: number): LinearMode {
  const n = system.states;
  const { columns, outputs, constants } = system;
  const matrix = numbers(n * n);
  for (let r = 0; r < n; r++) for (let c = 0; c < n; c++) matrix[r * n + c] = system.rows[r * columns + c] as number;
  const modal = modalBasis(matrix, n);
  const { reals, pairs } = modal;
  const terms = reals + pairs + 1;
  const coordinates = n + 2;
  const decay = numbers(terms);
  const rotation = numbers(terms);
  decay.set(modal.decay);
  rotation.set(modal.rotation);
  rotation[terms - 1] = omega;
  const { driveSin, driveCos } = driveAnswer(system, modal, omega);
  const constantStates = constantAnswers(system, modal);

  const outputStride = reals + 3 * (pairs + 1);
  const outputRows = numbers(outputs * outputStride);
  const constantOutputs = numbers(constants * outputs);
  for (let o = 0; o < outputs; o++) {
    const row = (n + o) * columns;
    let at = o * outputStride;
    for (let k = 0; k < reals; k++) outputRows[at++] = dot(system.rows, row, 1, modal.basis, k, n, n);
    for (let p = 0; p <= pairs; p++) {
      const k = reals + 2 * p;
      const drive = p === pairs;
      const re = drive ? dot(system.rows, row, 1, driveCos, 0, 1, n) : dot(system.rows, row, 1, modal.basis, k, n, n);
      const im = drive
        ? dot(system.rows, row, 1, driveSin, 0, 1, n) + (system.rows[row + n] as number)
        : dot(system.rows, row, 1, modal.basis, k + 1, n, n);
      outputRows[at++] = re;
      outputRows[at++] = im;
      outputRows[at++] = Math.sqrt(re * re + im * im);
    }
    for (let k = 0; k < constants; k++) {
      const own = system.rows[row + n + 1 + k] as number;
      constantOutputs[k * outputs + o] = dot(system.rows, row, 1, constantStates, k * n, 1, n) + own;
    }
  }

  const factors = numbers(LEVELS * coordinates);
  const bends = numbers(LEVELS * terms);
  const ranges = numbers(LEVELS * terms);
  const speeds = numbers(terms);
  let fastest = 0;
  for (let t = 0; t < terms; t++) {
    const d = decay[t] as number;
    const q = rotation[t] as number;
    const speed = Math.sqrt(d * d + q * q);
    speeds[t] = speed;
    if (speed > fastest) fastest = speed;
    const k = t < reals ? t : reals + 2 * (t - reals);
    // each level's factor is the square of the one below: rounding doubles 17 times, to 1e-11
    let re = Math.exp(d * shortest) * Math.cos(q * shortest);
    let im = Math.exp(d * shortest) * Math.sin(q * shortest);
    let h = shortest;
    for (let level = 0; level < LEVELS; level++) {
      factors[level * coordinates + k] = re;
      if (t >= reals) factors[level * coordinates + k + 1] = im;
      const growth = d > 0 ? Math.exp(d * h) : 1;
      if (speed * h <= SLOW_LIMIT) bends[level * terms + t] = (growth * speed * speed) / 8;
      else ranges[level * terms + t] = q === 0 ? growth : 2 * growth;
      const square = re * re - im * im;
      im *= 2 * re;
      re = square;
      h *= 2;
    }
  }
  return {
    states: n,
    outputs,
    modal,
    coordinates,
    terms,
    decay,
    rotation,
    outputRows,
    outputStride,
    driveCos,
    driveSin,
    constantStates,
    constantOutputs,
    factors,
    bends,
    ranges,
    speeds,
    fastest,
    grows: decay.some((d) => d > 0),
    kernels: kernelsFor(reals, pairs + 1),
  };
}
