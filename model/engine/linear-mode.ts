/**
 * A mode: one configuration's linear system in modal coordinates, ready to be stepped. Between switchings the state is
 *   x(t) = basis * z(t) + (particular solution of the mains sine) + (constant particular solution),
 * where each modal coordinate only decays or rotates. The mains is carried as one more undamped pair (cos wt, sin wt), so every output
 * is one dot product with the coordinates plus a constant.
 *
 * Steps come from a ladder h = shortest * 2^level. For each level the mode holds the factor of every coordinate. Over such a step one of
 * unit size can stray from the chord by |lambda|^2 h^2 / 8 where that is small ("slow", a bound on the curvature), or by its whole range
 * where it is not ("fast").
 */
import type { ModeSystem } from '../circuit/mode-system.ts';
import { numbers } from '../numbers.ts';
import { LADDER_LEVELS } from '../tolerances.ts';
import { MOST_STATES, type ModalBasis, modalBasis } from './eigen.ts';
import { type Kernels, kernelsFor } from './kernels.ts';
import { productOf } from './matrix-product.ts';

export const LEVELS = LADDER_LEVELS + 1;
/** levels whose factors are got from one another */
const SQUARED = 9;
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
  /** particular solution of the mains: x = drive[0..n) * cos wt + drive[n..2n) * sin wt */
  readonly drive: Float64Array;
  /** per constant: what the states and then the outputs answer to it */
  readonly constantAnswers: Float64Array;
  /** levels x coordinates (a pair: re, im of its factor) */
  readonly factors: Float64Array;
  /** levels x terms: how far a term of unit size can stray, where it is slow at that level as a curvature bound over 8, where it is fast its
   * whole range with a minus; found by takeStrays for the levels whose bit is set in `strayLevels` */
  readonly strays: Float64Array;
  strayLevels: number;
  /** s */
  readonly shortest: number;
  /** |lambda| of each term, and the largest, 1/s */
  readonly speeds: Float64Array;
  readonly fastest: number;
  /** some coordinate grows (a falling lamp curve) */
  readonly grows: boolean;
  readonly kernels: Kernels;
}

/** most constants: the triac's, the diac's, and one for each state at most */
const MOST_CONSTANTS = MOST_STATES + 2;
/** scratch of the mode that is being made: its matrix; the mains' and the constants' columns in modal coordinates; what the modal coordinates
 * answer to the mains' cosine and sine and to the constants; what the states answer to each coordinate, to those two and to the constants;
 * and the same of the outputs */
const matrix = new Float64Array(MOST_STATES * MOST_STATES);
const columnsInModes = new Float64Array(MOST_STATES * (1 + MOST_CONSTANTS));
const modalAnswers = new Float64Array(MOST_STATES * (2 + MOST_CONSTANTS));
const answers = new Float64Array(MOST_STATES * (MOST_STATES + 2 + MOST_CONSTANTS));
let outputAnswers = new Float64Array(0);

/**
 * Particular solution of the mains sine in modal coordinates: (j omega - Lambda) Z = beta in real coordinates and 2 x 2 blocks; x =
 * Im(X e^{j omega t}) = Re X sin + Im X cos. Into the first two columns of the modal answers: cos, sin.
 */
function answerDrive(modal: ModalBasis, omega: number, stride: number): void {
  const width = stride + 1;
  for (let k = 0; k < modal.reals; k++) {
    const d = modal.decay[k] as number;
    const own = columnsInModes[k * stride] as number;
    const square = d * d + omega * omega;
    modalAnswers[k * width] = (-omega * own) / square;
    modalAnswers[k * width + 1] = (-d * own) / square;
  }
  for (let p = 0; p < modal.pairs; p++) {
    const k = modal.reals + 2 * p;
    const d = modal.decay[modal.reals + p] as number;
    const q = modal.rotation[modal.reals + p] as number;
    const b1 = columnsInModes[k * stride] as number;
    const b2 = columnsInModes[(k + 1) * stride] as number;
    const detRe = d * d - omega * omega + q * q;
    const detIm = -2 * d * omega;
    const square = detRe * detRe + detIm * detIm;
    const firstRe = -d * b1 - q * b2;
    const secondRe = q * b1 - d * b2;
    modalAnswers[k * width] = (omega * b1 * detRe - firstRe * detIm) / square;
    modalAnswers[k * width + 1] = (firstRe * detRe + omega * b1 * detIm) / square;
    modalAnswers[(k + 1) * width] = (omega * b2 * detRe - secondRe * detIm) / square;
    modalAnswers[(k + 1) * width + 1] = (secondRe * detRe + omega * b2 * detIm) / square;
  }
}

/** particular solutions of the constants in modal coordinates, into the other columns of the modal answers */
function answerConstants(modal: ModalBasis, constants: number): void {
  const stride = 1 + constants;
  const width = 2 + constants;
  for (let c = 0; c < constants; c++) {
    for (let r = 0; r < modal.reals; r++) {
      const own = columnsInModes[r * stride + 1 + c] as number;
      modalAnswers[r * width + 2 + c] = own === 0 ? 0 : -own / (modal.decay[r] as number);
    }
    for (let p = 0; p < modal.pairs; p++) {
      const r = modal.reals + 2 * p;
      const d = modal.decay[modal.reals + p] as number;
      const q = modal.rotation[modal.reals + p] as number;
      const square = d * d + q * q;
      const c1 = columnsInModes[r * stride + 1 + c] as number;
      const c2 = columnsInModes[(r + 1) * stride + 1 + c] as number;
      modalAnswers[r * width + 2 + c] = -(d * c1 + q * c2) / square;
      modalAnswers[(r + 1) * width + 2 + c] = -(d * c2 - q * c1) / square;
    }
  }
}

/** finds the strays of a level; a mode is walked at few of them */
export function takeStrays(linear: LinearMode, level: number): void {
  if ((linear.strayLevels & (1 << level)) !== 0) return;
  linear.strayLevels |= 1 << level;
  const { terms, decay, rotation, speeds, strays } = linear;
  const h = linear.shortest * 2 ** level;
  for (let t = 0, at = level * terms; t < terms; t++, at++) {
    const d = decay[t] as number;
    const speed = speeds[t] as number;
    const growth = d > 0 ? Math.exp(d * h) : 1;
    if (speed * h <= SLOW_LIMIT) strays[at] = (growth * speed * speed) / 8;
    else strays[at] = rotation[t] === 0 ? -growth : -2 * growth;
  }
}

/** how the modal basis of a system's matrix (n x n) is come by */
export type Decomposition = (matrix: Float64Array, n: number) => ModalBasis;

export function linearMode(system: ModeSystem, omega: number, shortest: number, decompose: Decomposition = modalBasis): LinearMode {
  const n = system.states;
  const { columns, outputs, constants, rows } = system;
  for (let r = 0; r < n; r++) for (let c = 0; c < n; c++) matrix[r * n + c] = rows[r * columns + c] as number;
  const modal = decompose(matrix, n);
  const { reals, pairs, basis } = modal;
  const terms = reals + pairs + 1;
  const coordinates = n + 2;

  const product = productOf(n);
  const width = coordinates + constants;
  product(modal.inverse, 0, n, n, rows, n, columns, 1 + constants, columnsInModes, 0, 1 + constants);
  answerDrive(modal, omega, 1 + constants);
  answerConstants(modal, constants);
  for (let r = 0; r < n; r++) for (let c = 0; c < n; c++) answers[r * width + c] = basis[r * n + c] as number;
  product(basis, 0, n, n, modalAnswers, 0, 2 + constants, 2 + constants, answers, n, width);
  if (outputAnswers.length < outputs * width) outputAnswers = new Float64Array(outputs * width);
  product(rows, n * columns, columns, outputs, answers, 0, width, width, outputAnswers, 0, width);
  const drive = numbers(2 * n);
  const constantAnswers = numbers(constants * (n + outputs));
  for (let r = 0; r < n; r++) {
    const own = r * width;
    drive[r] = answers[own + n] as number;
    drive[n + r] = answers[own + n + 1] as number;
    for (let k = 0; k < constants; k++) constantAnswers[k * (n + outputs) + r] = answers[own + coordinates + k] as number;
  }

  const outputStride = reals + 3 * (pairs + 1);
  const outputRows = numbers(outputs * outputStride);
  for (let o = 0, at = 0; o < outputs; o++) {
    const row = (n + o) * columns;
    const own = o * width;
    // the mains and the constants reach an output directly too
    outputAnswers[own + n + 1] = (outputAnswers[own + n + 1] as number) + (rows[row + n] as number);
    for (let k = 0; k < reals; k++) outputRows[at++] = outputAnswers[own + k] as number;
    for (let k = reals; k < coordinates; k += 2) {
      const re = outputAnswers[own + k] as number;
      const im = outputAnswers[own + k + 1] as number;
      outputRows[at++] = re;
      outputRows[at++] = im;
      outputRows[at++] = Math.sqrt(re * re + im * im);
    }
    for (let k = 0; k < constants; k++) {
      constantAnswers[k * (n + outputs) + n + o] = (outputAnswers[own + coordinates + k] as number) + (rows[row + n + 1 + k] as number);
    }
  }

  const { decay, rotation } = modal;
  rotation[terms - 1] = omega;
  const factors = numbers(LEVELS * coordinates);
  const speeds = numbers(terms);
  let fastest = 0;
  let grows = false;
  for (let t = 0; t < terms; t++) {
    const d = decay[t] as number;
    const q = rotation[t] as number;
    const speed = Math.sqrt(d * d + q * q);
    speeds[t] = speed;
    if (speed > fastest) fastest = speed;
    if (d > 0) grows = true;
    // each level's factor is the square of the one below, but for one in the middle: rounding doubles from level to level, to 1e-13
    for (let from = 0; from < LEVELS; from += SQUARED) {
      const h = shortest * 2 ** from;
      const to = Math.min(from + SQUARED, LEVELS);
      const size = Math.exp(d * h);
      if (t < reals) {
        for (let level = from, f = from * coordinates + t, re = size; level < to; level++, f += coordinates, re *= re) factors[f] = re;
        continue;
      }
      let re = size * Math.cos(q * h);
      let im = size * Math.sin(q * h);
      for (let level = from, f = from * coordinates + 2 * t - reals; level < to; level++, f += coordinates) {
        factors[f] = re;
        factors[f + 1] = im;
        const next = re * re - im * im;
        im *= 2 * re;
        re = next;
      }
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
    drive,
    constantAnswers,
    factors,
    strays: numbers(LEVELS * terms),
    strayLevels: 0,
    shortest,
    speeds,
    fastest,
    grows,
    kernels: kernelsFor(reals, pairs + 1),
  };
}
