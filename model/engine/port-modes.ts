/**
 * The modal basis of a system whose timing resistor has changed, from the basis at another resistance. The resistor is a port, so its change
 * adds a matrix of rank one: A' = A + change * u v. With the known eigenvalues l_k, left and right eigenvectors, b_k = (left_k u) and c_k =
 * (v right_k), the new eigenvalues are the roots of the secular equation
 *   1 + change * sum of b_k c_k / (l_k - l) = 0
 * and the new eigenvectors have the coordinates b_k / (l_k - l) on the right, c_k / (l_k - l) on the left (Golub & Van Loan, Matrix
 * Computations, on rank-one changes of eigenproblems). That is a fraction of the work of a decomposition. What comes out is held against the
 * matrix; where it is not as good as a decomposition, null says so.
 *
 * Eigenvalues are numbered as in ModalBasis, a pair by the one with the positive imaginary part; the conjugates follow as many places later.
 */
import type { OpenModeSystem } from '../circuit/mode-system.ts';
import { numbers } from '../numbers.ts';
import { MODE_CONDITION, PORT_FOUND, PORT_IDENTITY, PORT_RESIDUAL, PORT_TRIES, PORT_UNREACHED } from '../tolerances.ts';
import { conditionOf, MOST_STATES, type ModalBasis } from './eigen.ts';
import { productOf } from './matrix-product.ts';

export interface PortModes {
  readonly modal: ModalBasis;
  /** 1/Ohm: what multiplies u v in the matrix that was decomposed */
  readonly gain: number;
  /** of each eigenvalue and each conjugate: itself, its b, its c, and b times c; nothing where the port does not reach it, or where there is no
   * conjugate */
  readonly knownRe: Float64Array;
  readonly knownIm: Float64Array;
  readonly inRe: Float64Array;
  readonly inIm: Float64Array;
  readonly outRe: Float64Array;
  readonly outIm: Float64Array;
  readonly weightRe: Float64Array;
  readonly weightIm: Float64Array;
  /** eigenvalues at the resistance before: where the search for the next ones begins */
  decay: Float64Array;
  rotation: Float64Array;
}

/** stands for the part that an eigenvalue has in the port, or the port in it, where only one of the two is there: so the formulas come to their
 * limits by themselves */
const NEXT_TO_NOTHING = 1e-40;

/** from the basis of the system closed with that gain */
export function portModes(modal: ModalBasis, gain: number, { rows, columns, states: n, outputs }: OpenModeSystem): PortModes {
  const { reals, pairs, basis, inverse } = modal;
  const count = reals + pairs;
  const made = {
    modal,
    gain,
    knownRe: numbers(2 * count),
    knownIm: numbers(2 * count),
    inRe: numbers(2 * count),
    inIm: numbers(2 * count),
    outRe: numbers(2 * count),
    outIm: numbers(2 * count),
    weightRe: numbers(2 * count),
    weightIm: numbers(2 * count),
    decay: modal.decay,
    rotation: modal.rotation,
  };
  const input = (row: number): number => {
    let sum = 0;
    for (let k = 0; k < n; k++) sum += (inverse[row * n + k] as number) * (rows[k * columns + columns - 1] as number);
    return sum;
  };
  const output = (column: number): number => {
    let sum = 0;
    for (let k = 0; k < n; k++) sum += (rows[(n + outputs) * columns + k] as number) * (basis[k * n + column] as number);
    return sum;
  };
  for (let t = 0; t < count; t++) {
    const k = t < reals ? t : 2 * t - reals;
    const isPair = t >= reals;
    made.inRe[t] = input(k);
    made.inIm[t] = isPair ? input(k + 1) : 0;
    // a pair's columns are twice the real part of its eigenvector and minus twice the imaginary part
    made.outRe[t] = isPair ? output(k) / 2 : output(k);
    made.outIm[t] = isPair ? -output(k + 1) / 2 : 0;
  }
  forgetUnreached(made, count);
  putConjugates(made, count);
  return made;
}

/** what the port does not reach but for rounding, nor it the port, is not reached at all */
function forgetUnreached({ inRe, inIm, outRe, outIm }: PortModes, count: number): void {
  let mostIn = 0;
  let mostOut = 0;
  for (let t = 0; t < count; t++) {
    mostIn = Math.max(mostIn, Math.abs(inRe[t] as number) + Math.abs(inIm[t] as number));
    mostOut = Math.max(mostOut, Math.abs(outRe[t] as number) + Math.abs(outIm[t] as number));
  }
  for (let t = 0; t < count; t++) {
    const reached = Math.abs(inRe[t] as number) + Math.abs(inIm[t] as number) > PORT_UNREACHED * mostIn;
    const reaches = Math.abs(outRe[t] as number) + Math.abs(outIm[t] as number) > PORT_UNREACHED * mostOut;
    if (!reached) {
      inRe[t] = reaches ? NEXT_TO_NOTHING * mostIn : 0;
      inIm[t] = 0;
    }
    if (!reaches) {
      outRe[t] = reached ? NEXT_TO_NOTHING * mostOut : 0;
      outIm[t] = 0;
    }
  }
}

function putConjugates(port: PortModes, count: number): void {
  const { modal, knownRe, knownIm, inRe, inIm, outRe, outIm, weightRe, weightIm } = port;
  for (let t = 0; t < count; t++) {
    const isPair = t >= modal.reals;
    knownRe[t] = modal.decay[t] as number;
    knownIm[t] = isPair ? (modal.rotation[t] as number) : 0;
    weightRe[t] = (inRe[t] as number) * (outRe[t] as number) - (inIm[t] as number) * (outIm[t] as number);
    weightIm[t] = (inRe[t] as number) * (outIm[t] as number) + (inIm[t] as number) * (outRe[t] as number);
    if (!isPair) continue;
    for (const part of [knownRe, inRe, outRe, weightRe]) part[count + t] = part[t] as number;
    for (const part of [knownIm, inIm, outIm, weightIm]) part[count + t] = -(part[t] as number);
  }
}

/** scratch: of the root that is sought, 1/(l_k - l) for each known eigenvalue and each conjugate */
const gapRe = new Float64Array(2 * MOST_STATES);
const gapIm = new Float64Array(2 * MOST_STATES);
/** the eigenvalue found */
let rootRe = 0;
let rootIm = 0;
/** the new basis in terms of the old one, n x n, and the new inverse in terms of the old one; and what checks them */
const turn = new Float64Array(MOST_STATES * MOST_STATES);
const turnBack = new Float64Array(MOST_STATES * MOST_STATES);
const checked = new Float64Array(MOST_STATES * MOST_STATES);

/** whether the port reaches an eigenvalue, or it the port */
const isCoupled = ({ weightRe, weightIm }: PortModes, k: number): boolean => weightRe[k] !== 0 || weightIm[k] !== 0;

/** the known eigenvalue nearest to one of the same sort; -1 for none */
function nearestTo(port: PortModes, re: number, im: number, isPair: boolean): number {
  const { modal, knownRe, knownIm } = port;
  const { reals, pairs } = modal;
  let nearest = -1;
  let least = Number.POSITIVE_INFINITY;
  for (let t = isPair ? reals : 0; t < (isPair ? reals + pairs : reals); t++) {
    if (!isCoupled(port, t)) continue;
    const distance = Math.abs((knownRe[t] as number) - re) + Math.abs((knownIm[t] as number) - im);
    if (distance < least) {
      least = distance;
      nearest = t;
    }
  }
  return nearest;
}

/**
 * Newton's iteration from the eigenvalue before, on the secular equation times the distance to the nearest known eigenvalue, which makes it
 * smooth there. Leaves the eigenvalue and the reciprocal distances to it; false where it is not found.
 */
function findRoot(port: PortModes, change: number, term: number, isPair: boolean): boolean {
  const { modal, knownRe, knownIm, weightRe, weightIm } = port;
  const count = modal.reals + modal.pairs;
  rootRe = port.decay[term] as number;
  rootIm = isPair ? (port.rotation[term] as number) : 0;
  let nearest = -1;
  let nearer = nearestTo(port, rootRe, rootIm, isPair);
  if (nearer < 0) return false;
  let poleRe = 0;
  let poleIm = 0;
  let ownRe = 0;
  let ownIm = 0;
  let muRe = 0;
  let muIm = 0;
  for (let tries = 0; tries < PORT_TRIES; tries++) {
    if (nearer !== nearest) {
      nearest = nearer;
      poleRe = knownRe[nearest] as number;
      poleIm = knownIm[nearest] as number;
      ownRe = change * (weightRe[nearest] as number);
      ownIm = change * (weightIm[nearest] as number);
      muRe = rootRe - poleRe;
      muIm = rootIm - poleIm;
    }
    // g = 1 + change * sum over the others, and its slope
    let gRe = 1;
    let gIm = 0;
    let slopeRe = 0;
    let slopeIm = 0;
    for (let k = 0; k < 2 * count; k++) {
      if (k === nearest || !isCoupled(port, k)) continue;
      const dRe = (knownRe[k] as number) - poleRe - muRe;
      const dIm = (knownIm[k] as number) - poleIm - muIm;
      const square = dRe * dRe + dIm * dIm;
      const re = dRe / square;
      const im = -dIm / square;
      gapRe[k] = re;
      gapIm[k] = im;
      const a = change * (weightRe[k] as number);
      const b = change * (weightIm[k] as number);
      const partRe = a * re - b * im;
      const partIm = a * im + b * re;
      gRe += partRe;
      gIm += partIm;
      slopeRe += partRe * re - partIm * im;
      slopeIm += partRe * im + partIm * re;
    }
    if (!isPair) {
      // the conjugates' parts have cancelled the imaginary ones but for rounding
      gIm = 0;
      slopeIm = 0;
    }
    const hRe = muRe * gRe - muIm * gIm - ownRe;
    const hIm = muRe * gIm + muIm * gRe - ownIm;
    const steepRe = gRe + muRe * slopeRe - muIm * slopeIm;
    const steepIm = gIm + muRe * slopeIm + muIm * slopeRe;
    const square = steepRe * steepRe + steepIm * steepIm;
    const byRe = (hRe * steepRe + hIm * steepIm) / square;
    const byIm = (hIm * steepRe - hRe * steepIm) / square;
    if (Math.abs(byRe) + Math.abs(byIm) <= PORT_FOUND * (Math.abs(muRe) + Math.abs(muIm))) {
      // measured from elsewhere, the distance to the one it has come closest to would have that much more rounding
      nearer = nearestTo(port, rootRe, rootIm, isPair);
      if (nearer !== nearest) continue;
      const length = muRe * muRe + muIm * muIm;
      gapRe[nearest] = -muRe / length;
      gapIm[nearest] = muIm / length;
      return length > 0 && (!isPair || rootIm > 0);
    }
    muRe -= byRe;
    muIm -= byIm;
    rootRe = poleRe + muRe;
    rootIm = poleIm + muIm;
  }
  return false;
}

/** right and left coordinates of the root that was found, per eigenvalue and per conjugate: b_k/(l_k - l), c_k/(l_k - l) */
const rightRe = new Float64Array(2 * MOST_STATES);
const rightIm = new Float64Array(2 * MOST_STATES);
const leftRe = new Float64Array(2 * MOST_STATES);
const leftIm = new Float64Array(2 * MOST_STATES);

/** takes those coordinates, the right ones at most 1 in size, the left ones so that the two together make 1 */
function takeVectors(port: PortModes): void {
  const { inRe, inIm, outRe, outIm, modal } = port;
  const count = modal.reals + modal.pairs;
  let most = 0;
  let sumRe = 0;
  let sumIm = 0;
  for (let k = 0; k < 2 * count; k++) {
    // nothing where the port does not reach
    const re = isCoupled(port, k) ? (gapRe[k] as number) : 0;
    const im = isCoupled(port, k) ? (gapIm[k] as number) : 0;
    const yRe = (inRe[k] as number) * re - (inIm[k] as number) * im;
    const yIm = (inRe[k] as number) * im + (inIm[k] as number) * re;
    const zRe = (outRe[k] as number) * re - (outIm[k] as number) * im;
    const zIm = (outRe[k] as number) * im + (outIm[k] as number) * re;
    rightRe[k] = yRe;
    rightIm[k] = yIm;
    leftRe[k] = zRe;
    leftIm[k] = zIm;
    sumRe += zRe * yRe - zIm * yIm;
    sumIm += zRe * yIm + zIm * yRe;
    most = Math.max(most, Math.abs(yRe) + Math.abs(yIm));
  }
  const square = sumRe * sumRe + sumIm * sumIm;
  const scaleRe = (most * sumRe) / square;
  const scaleIm = (-most * sumIm) / square;
  for (let k = 0; k < 2 * count; k++) {
    rightRe[k] = (rightRe[k] as number) / most;
    rightIm[k] = (rightIm[k] as number) / most;
    const re = leftRe[k] as number;
    const im = leftIm[k] as number;
    leftRe[k] = re * scaleRe - im * scaleIm;
    leftIm[k] = re * scaleIm + im * scaleRe;
  }
}

/** lays those coordinates down as a column (a pair: two) of `turn` and a row (two) of `turnBack` */
function layDown({ modal }: PortModes, n: number, term: number, isPair: boolean): void {
  const { reals, pairs } = modal;
  const count = reals + pairs;
  const column = isPair ? 2 * term - reals : term;
  for (let t = 0; t < reals; t++) {
    turn[t * n + column] = isPair ? 2 * (rightRe[t] as number) : (rightRe[t] as number);
    turnBack[column * n + t] = leftRe[t] as number;
    if (!isPair) continue;
    turn[t * n + column + 1] = -2 * (rightIm[t] as number);
    turnBack[(column + 1) * n + t] = leftIm[t] as number;
  }
  for (let t = reals; t < count; t++) {
    const k = 2 * t - reals;
    const yRe = rightRe[t] as number;
    const yIm = rightIm[t] as number;
    const zRe = leftRe[t] as number;
    const zIm = leftIm[t] as number;
    if (!isPair) {
      turn[k * n + column] = yRe;
      turn[(k + 1) * n + column] = yIm;
      turnBack[column * n + k] = 2 * zRe;
      turnBack[column * n + k + 1] = -2 * zIm;
      continue;
    }
    const farYRe = rightRe[count + t] as number;
    const farYIm = rightIm[count + t] as number;
    const farZRe = leftRe[count + t] as number;
    const farZIm = leftIm[count + t] as number;
    turn[k * n + column] = yRe + farYRe;
    turn[(k + 1) * n + column] = yIm - farYIm;
    turn[k * n + column + 1] = -(yIm + farYIm);
    turn[(k + 1) * n + column + 1] = yRe - farYRe;
    turnBack[column * n + k] = zRe + farZRe;
    turnBack[column * n + k + 1] = -(zIm - farZIm);
    turnBack[(column + 1) * n + k] = zIm + farZIm;
    turnBack[(column + 1) * n + k + 1] = zRe - farZRe;
  }
}

/** an eigenvalue that the port does not reach stays as it is */
function layDownAsItWas({ modal }: PortModes, n: number, term: number, isPair: boolean): void {
  const column = isPair ? 2 * term - modal.reals : term;
  for (let k = column; k <= (isPair ? column + 1 : column); k++) {
    for (let c = 0; c < n; c++) {
      turn[c * n + k] = c === k ? 1 : 0;
      turnBack[k * n + c] = c === k ? 1 : 0;
    }
  }
}

/** the basis at another gain; null where it cannot be had, or not as well as by a decomposition */
export function modesAtGain(port: PortModes, gain: number, matrix: Float64Array, n: number): ModalBasis | null {
  const { modal } = port;
  const { reals, pairs } = modal;
  const count = reals + pairs;
  const decay = numbers(count + 1);
  const rotation = numbers(count + 1);
  for (let t = 0; t < count; t++) {
    const isPair = t >= reals;
    if (!isCoupled(port, t)) {
      decay[t] = modal.decay[t] as number;
      rotation[t] = isPair ? (modal.rotation[t] as number) : 0;
      layDownAsItWas(port, n, t, isPair);
      continue;
    }
    if (!findRoot(port, gain - port.gain, t, isPair)) return null;
    decay[t] = rootRe;
    rotation[t] = isPair ? rootIm : 0;
    takeVectors(port);
    layDown(port, n, t, isPair);
  }
  const product = productOf(n);
  const basis = numbers(n * n);
  const inverse = numbers(n * n);
  product(modal.basis, 0, n, n, turn, 0, n, n, basis, 0, n);
  product(turnBack, 0, n, n, modal.inverse, 0, n, n, inverse, 0, n);
  const condition = conditionOf(basis, inverse, n);
  const made = { reals, pairs, decay, rotation, basis, inverse, condition };
  if (!(condition < MODE_CONDITION) || !isGood(made, matrix, n)) return null;
  port.decay = decay;
  port.rotation = rotation;
  return made;
}

/** whether inverse and basis make 1, and the matrix times the basis the basis times its eigenvalues */
function isGood({ reals, pairs, decay, rotation, basis, inverse }: ModalBasis, matrix: Float64Array, n: number): boolean {
  const product = productOf(n);
  product(inverse, 0, n, n, basis, 0, n, n, checked, 0, n);
  for (let r = 0, at = 0; r < n; r++) {
    for (let c = 0; c < n; c++, at++) if (!(Math.abs((checked[at] as number) - (r === c ? 1 : 0)) < PORT_IDENTITY)) return false;
  }
  product(matrix, 0, n, n, basis, 0, n, n, checked, 0, n);
  let size = 0;
  for (let k = 0; k < n * n; k++) size = Math.max(size, Math.abs(matrix[k] as number));
  for (let t = 0; t < reals + pairs; t++) {
    const isPair = t >= reals;
    const k = isPair ? 2 * t - reals : t;
    const d = decay[t] as number;
    const q = rotation[t] as number;
    for (let r = 0, at = k; r < n; r++, at += n) {
      const a = basis[at] as number;
      const b = isPair ? (basis[at + 1] as number) : 0;
      if (!(Math.abs((checked[at] as number) - d * a - q * b) < PORT_RESIDUAL * size)) return false;
      if (isPair && !(Math.abs((checked[at + 1] as number) - d * b + q * a) < PORT_RESIDUAL * size)) return false;
    }
  }
  return true;
}
