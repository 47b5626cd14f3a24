/**
 * Eigenvalues and eigenvectors of a small real matrix: Householder reduction to Hessenberg form, the shifted QR iteration in complex
 * arithmetic, back substitution (Golub & Van Loan, Matrix Computations, ch. 7). The result is a real basis: one column per real
 * eigenvalue and two per complex pair, so that the system is diagonal but for a rotation per pair.
 */
import { numbers } from '../numbers.ts';
import { DEFECT_NUDGES, MODE_CONDITION } from '../tolerances.ts';

export interface ModalBasis {
  /** number of real eigenvalues (they come first) and of complex pairs */
  readonly reals: number;
  readonly pairs: number;
  /** per eigenvalue or pair: real part and (positive) imaginary part, 1/s; there is room for one more (the mains, in LinearMode) */
  readonly decay: Float64Array;
  readonly rotation: Float64Array;
  /** n x n, row-major: state = basis * modal; for a pair the two columns belong to the real and imaginary part of its coordinate */
  readonly basis: Float64Array;
  /** inverse of `basis` */
  readonly inverse: Float64Array;
  /** Frobenius condition of the basis over n: how much rounding is amplified */
  readonly condition: number;
}

/** most states a circuit can have: twelve groups with every optional part stay below */
export const MOST_STATES = 128;
/** most coordinates of a mode: its states' and the mains' pair */
export const MOST_COORDINATES = MOST_STATES + 2;

/** scratch of the decomposition that is being made: the triangular matrix, what transforms it, the inverse's left half, vectors */
const hRe = new Float64Array(MOST_STATES * MOST_STATES);
const hIm = new Float64Array(MOST_STATES * MOST_STATES);
const qRe = new Float64Array(MOST_STATES * MOST_STATES);
const qIm = new Float64Array(MOST_STATES * MOST_STATES);
const left = new Float64Array(MOST_STATES * MOST_STATES);
const v = new Float64Array(MOST_STATES);
const yRe = new Float64Array(MOST_STATES);
const yIm = new Float64Array(MOST_STATES);
const vRe = new Float64Array(MOST_STATES);
const vIm = new Float64Array(MOST_STATES);
const order = new Int32Array(MOST_STATES);

function at(a: Float64Array, k: number): number {
  return a[k] as number;
}

/** modulus of a complex number; the entries are far from the ends of the number range, so the plain root does */
function size(re: number, im: number): number {
  return Math.sqrt(re * re + im * im);
}

/** reduces h (n x n) to upper Hessenberg form and accumulates the orthogonal transformation in q */
function toHessenberg(h: Float64Array, q: Float64Array, n: number): void {
  for (let k = 0; k < n - 2; k++) {
    let norm = 0;
    for (let r = k + 1; r < n; r++) norm += at(h, r * n + k) ** 2;
    norm = Math.sqrt(norm);
    let below = 0;
    for (let r = k + 2; r < n; r++) below += Math.abs(at(h, r * n + k));
    if (below === 0) continue;
    const head = at(h, (k + 1) * n + k);
    const pivot = head >= 0 ? head + norm : head - norm;
    let square = pivot * pivot;
    v[k + 1] = pivot;
    for (let r = k + 2; r < n; r++) {
      v[r] = at(h, r * n + k);
      square += at(v, r) ** 2;
    }
    const beta = 2 / square;
    for (let c = 0; c < n; c++) {
      let dot = 0;
      for (let r = k + 1; r < n; r++) dot += at(v, r) * at(h, r * n + c);
      dot *= beta;
      for (let r = k + 1; r < n; r++) h[r * n + c] = at(h, r * n + c) - dot * at(v, r);
    }
    for (const m of [h, q]) {
      for (let r = 0; r < n; r++) {
        let dot = 0;
        for (let c = k + 1; c < n; c++) dot += at(v, c) * at(m, r * n + c);
        dot *= beta;
        for (let c = k + 1; c < n; c++) m[r * n + c] = at(m, r * n + c) - dot * at(v, c);
      }
    }
    for (let r = k + 2; r < n; r++) h[r * n + k] = 0;
  }
}

/** shift of the QR step to come: re, im */
const shift = new Float64Array(2);

/** the eigenvalue of the trailing 2 x 2 block that lies nearer its last diagonal entry, into `shift` */
function wilkinsonShift(re: Float64Array, im: Float64Array, n: number, hi: number): void {
  const a = (hi - 1) * n + hi - 1;
  const b = a + 1;
  const c = hi * n + hi - 1;
  const d = c + 1;
  const halfRe = (at(re, a) - at(re, d)) / 2;
  const halfIm = (at(im, a) - at(im, d)) / 2;
  const bcRe = at(re, b) * at(re, c) - at(im, b) * at(im, c);
  const bcIm = at(re, b) * at(im, c) + at(im, b) * at(re, c);
  const sqRe = halfRe * halfRe - halfIm * halfIm + bcRe;
  const sqIm = 2 * halfRe * halfIm + bcIm;
  const modulus = size(sqRe, sqIm);
  let rootRe = Math.sqrt((modulus + Math.abs(sqRe)) / 2);
  let rootIm = rootRe === 0 ? 0 : sqIm / (2 * rootRe);
  if (sqRe < 0) {
    const turned = sqIm < 0 ? -rootRe : rootRe;
    rootRe = Math.abs(rootIm);
    rootIm = turned;
  }
  if (halfRe * rootRe + halfIm * rootIm > 0) {
    rootRe = -rootRe;
    rootIm = -rootIm;
  }
  shift[0] = at(re, d) + halfRe + rootRe;
  shift[1] = at(im, d) + halfIm + rootIm;
}

/** the rotations of the QR step that is being taken, per column: cosine, complex sine */
const cos = new Float64Array(MOST_STATES);
const sinRe = new Float64Array(MOST_STATES);
const sinIm = new Float64Array(MOST_STATES);

/** applies rotation k from the right to the first `rows` rows */
function rotateColumns(mRe: Float64Array, mIm: Float64Array, n: number, k: number, rows: number): void {
  const c = at(cos, k);
  const sr = at(sinRe, k);
  const si = at(sinIm, k);
  for (let r = 0; r < rows; r++) {
    const u = r * n + k;
    const ur = at(mRe, u);
    const ui = at(mIm, u);
    const wr = at(mRe, u + 1);
    const wi = at(mIm, u + 1);
    mRe[u] = c * ur + sr * wr + si * wi;
    mIm[u] = c * ui + sr * wi - si * wr;
    mRe[u + 1] = c * wr - sr * ur + si * ui;
    mIm[u + 1] = c * wi - sr * ui - si * ur;
  }
}

/** one explicit QR step on rows lo..hi with the shift, by complex Givens rotations, accumulated in (qRe, qIm) */
function qrStep(re: Float64Array, im: Float64Array, qRe: Float64Array, qIm: Float64Array, n: number, lo: number, hi: number): void {
  const shiftRe = at(shift, 0);
  const shiftIm = at(shift, 1);
  for (let k = 0; k < n; k++) {
    re[k * n + k] = at(re, k * n + k) - shiftRe;
    im[k * n + k] = at(im, k * n + k) - shiftIm;
  }
  for (let k = lo; k < hi; k++) {
    const p = k * n + k;
    const s = p + n;
    const top = size(at(re, p), at(im, p));
    const bottom = size(at(re, s), at(im, s));
    const length = size(top, bottom);
    if (length === 0) {
      cos[k] = 1;
      sinRe[k] = 0;
      sinIm[k] = 0;
      continue;
    }
    // rotation [c, s; -conj(s), c] with c real that annuls the subdiagonal
    const phaseRe = top === 0 ? 1 : at(re, p) / top;
    const phaseIm = top === 0 ? 0 : at(im, p) / top;
    const c = top / length;
    const sr = (phaseRe * at(re, s) + phaseIm * at(im, s)) / length;
    const si = (phaseIm * at(re, s) - phaseRe * at(im, s)) / length;
    cos[k] = c;
    sinRe[k] = sr;
    sinIm[k] = si;
    for (let j = k; j < n; j++) {
      const u = k * n + j;
      const w = u + n;
      const ur = at(re, u);
      const ui = at(im, u);
      const wr = at(re, w);
      const wi = at(im, w);
      re[u] = c * ur + sr * wr - si * wi;
      im[u] = c * ui + sr * wi + si * wr;
      re[w] = c * wr - sr * ur - si * ui;
      im[w] = c * wi - sr * ui + si * ur;
    }
  }
  for (let k = lo; k < hi; k++) {
    rotateColumns(re, im, n, k, Math.min(k + 2, hi + 1));
    rotateColumns(qRe, qIm, n, k, n);
  }
  for (let k = 0; k < n; k++) {
    re[k * n + k] = at(re, k * n + k) + shiftRe;
    im[k * n + k] = at(im, k * n + k) + shiftIm;
  }
}

/** makes (re, im) upper triangular by unitary transformations, accumulated in (qRe, qIm) */
function toTriangular(re: Float64Array, im: Float64Array, qRe: Float64Array, qIm: Float64Array, n: number): void {
  let hi = n - 1;
  let tries = 0;
  while (hi > 0) {
    let lo = hi;
    while (lo > 0) {
      const sub = lo * n + lo - 1;
      const neighbours =
        Math.abs(at(re, lo * n + lo)) + Math.abs(at(im, lo * n + lo)) + Math.abs(at(re, sub - n)) + Math.abs(at(im, sub - n));
      if (Math.abs(at(re, sub)) + Math.abs(at(im, sub)) <= 1.2e-16 * neighbours) {
        re[sub] = 0;
        im[sub] = 0;
        break;
      }
      lo--;
    }
    if (lo === hi) {
      hi--;
      tries = 0;
      continue;
    }
    tries++;
    if (tries > 100) throw new Error('QR iteration did not converge');
    wilkinsonShift(re, im, n, hi);
    if (tries % 11 === 10) {
      shift[0] = at(re, hi * n + hi) + Math.abs(at(re, hi * n + hi - 1));
      shift[1] = at(im, hi * n + hi);
    }
    qrStep(re, im, qRe, qIm, n, lo, hi);
  }
}

/** real inverse by Gauss-Jordan with partial pivoting */
function invert(matrix: Float64Array, n: number): Float64Array {
  const m = left;
  for (let k = 0; k < n * n; k++) m[k] = at(matrix, k);
  const inverse = numbers(n * n);
  for (let k = 0; k < n; k++) inverse[k * n + k] = 1;
  for (let k = 0; k < n; k++) {
    let pivot = k;
    for (let r = k + 1; r < n; r++) if (Math.abs(at(m, r * n + k)) > Math.abs(at(m, pivot * n + k))) pivot = r;
    for (const x of [m, inverse]) {
      if (pivot === k) break;
      for (let c = 0; c < n; c++) {
        const t = at(x, k * n + c);
        x[k * n + c] = at(x, pivot * n + c);
        x[pivot * n + c] = t;
      }
    }
    const head = 1 / at(m, k * n + k);
    for (let c = 0; c < n; c++) {
      m[k * n + c] = at(m, k * n + c) * head;
      inverse[k * n + c] = at(inverse, k * n + c) * head;
    }
    for (let r = 0; r < n; r++) {
      const factor = r === k ? 0 : at(m, r * n + k);
      if (factor === 0) continue;
      for (let c = 0; c < n; c++) {
        m[r * n + c] = at(m, r * n + c) - factor * at(m, k * n + c);
        inverse[r * n + c] = at(inverse, r * n + c) - factor * at(inverse, k * n + c);
      }
    }
  }
  return inverse;
}

/** Frobenius norm of an n x n matrix */
function norm(matrix: Float64Array, n: number): number {
  let sum = 0;
  for (let k = 0; k < n * n; k++) {
    const own = at(matrix, k);
    sum += own * own;
  }
  return Math.sqrt(sum);
}

/** Frobenius condition of a basis over n */
export function conditionOf(basis: Float64Array, inverse: Float64Array, n: number): number {
  return (norm(basis, n) * norm(inverse, n)) / n;
}

/** eigenvector of the triangular (re, im) for its k-th diagonal entry, in the original coordinates, into vRe and vIm, largest entry real */
function eigenvector(re: Float64Array, im: Float64Array, n: number, k: number, smallest: number): void {
  yRe[k] = 1;
  yIm[k] = 0;
  for (let i = k - 1; i >= 0; i--) {
    let sRe = 0;
    let sIm = 0;
    for (let j = i + 1; j <= k; j++) {
      const t = i * n + j;
      sRe += at(re, t) * at(yRe, j) - at(im, t) * at(yIm, j);
      sIm += at(re, t) * at(yIm, j) + at(im, t) * at(yRe, j);
    }
    let dRe = at(re, k * n + k) - at(re, i * n + i);
    let dIm = at(im, k * n + k) - at(im, i * n + i);
    let square = dRe * dRe + dIm * dIm;
    if (square < smallest * smallest) {
      dRe = smallest;
      dIm = 0;
      square = smallest * smallest;
    }
    yRe[i] = (sRe * dRe + sIm * dIm) / square;
    yIm[i] = (sIm * dRe - sRe * dIm) / square;
  }
  let largest = 0;
  let largestAt = 0;
  for (let r = 0; r < n; r++) {
    let sRe = 0;
    let sIm = 0;
    for (let j = 0, t = r * n; j <= k; j++, t++) {
      sRe += at(qRe, t) * at(yRe, j) - at(qIm, t) * at(yIm, j);
      sIm += at(qRe, t) * at(yIm, j) + at(qIm, t) * at(yRe, j);
    }
    vRe[r] = sRe;
    vIm[r] = sIm;
    const square = sRe * sRe + sIm * sIm;
    if (square > largest) {
      largest = square;
      largestAt = r;
    }
  }
  const pRe = at(vRe, largestAt) / largest;
  const pIm = -at(vIm, largestAt) / largest;
  for (let r = 0; r < n; r++) {
    const a = at(vRe, r);
    const b = at(vIm, r);
    vRe[r] = a * pRe - b * pIm;
    vIm[r] = a * pIm + b * pRe;
  }
}

/** whether one of the pairs has about the same real part as the k-th eigenvalue */
function hasPartner(re: Float64Array, n: number, k: number, reals: number, pairs: number, within: number): boolean {
  for (let p = reals; p < reals + pairs; p++) {
    const partner = order[p] as number;
    if (Math.abs(at(re, partner * n + partner) - at(re, k * n + k)) < within) return true;
  }
  return false;
}

function decompose(matrix: Float64Array, n: number): ModalBasis {
  const h = hRe;
  const im = hIm;
  for (let k = 0; k < n * n; k++) {
    h[k] = at(matrix, k);
    im[k] = 0;
    qRe[k] = 0;
    qIm[k] = 0;
  }
  for (let k = 0; k < n; k++) qRe[k * n + k] = 1;
  toHessenberg(h, qRe, n);
  toTriangular(h, im, qRe, qIm, n);
  const scale = norm(matrix, n);
  const realBelow = 1e-13 * scale;
  // the reals' places on the diagonal, then the pairs'
  let reals = 0;
  let pairs = 0;
  for (let k = 0; k < n; k++) if (Math.abs(at(im, k * n + k)) <= realBelow) order[reals++] = k;
  for (let k = 0; k < n; k++) if (at(im, k * n + k) > realBelow) order[reals + pairs++] = k;
  // a pair may straddle the threshold by rounding: what is left without its partner counts as real
  for (let k = 0; reals + 2 * pairs < n && k < n; k++) {
    if (at(im, k * n + k) >= -realBelow || hasPartner(h, n, k, reals, pairs, 1e-6 * scale)) continue;
    order.copyWithin(reals + 1, reals, reals + pairs);
    order[reals++] = k;
  }
  const count = reals + pairs;
  const decay = numbers(count + 1);
  const rotation = numbers(count + 1);
  const basis = numbers(n * n);
  const smallest = 1e-16 * scale || 1e-300;
  for (let mode = 0; mode < count; mode++) {
    const k = order[mode] as number;
    eigenvector(h, im, n, k, smallest);
    decay[mode] = at(h, k * n + k);
    if (mode < reals) {
      for (let r = 0; r < n; r++) basis[r * n + mode] = at(vRe, r);
      continue;
    }
    rotation[mode] = at(im, k * n + k);
    const column = 2 * mode - reals;
    for (let r = 0; r < n; r++) {
      basis[r * n + column] = 2 * at(vRe, r);
      if (column + 1 < n) basis[r * n + column + 1] = -2 * at(vIm, r);
    }
  }
  const inverse = invert(basis, n);
  return { reals, pairs, decay, rotation, basis, inverse, condition: conditionOf(basis, inverse, n) };
}

/** a fixed pattern of numbers between -1 and 1 without structure of its own, so that a nudge by it splits any defect */
function pattern(r: number, c: number): number {
  return ((r * 31 + c * 17 + r * c * 7 + 5) % 23) / 11.5 - 1;
}

const isComplete = ({ reals, pairs }: ModalBasis, n: number): boolean => reals + 2 * pairs === n;

/**
 * Modal basis of a real n x n matrix (row-major). Where the eigenvectors are nearly parallel (critical damping, equal twins) the
 * matrix is nudged by a tiny share of itself, which separates them at an error far below any tolerance.
 */
export function modalBasis(matrix: Float64Array, n: number): ModalBasis {
  let best = decompose(matrix, n);
  for (const nudge of DEFECT_NUDGES) {
    if (isComplete(best, n) && best.condition < MODE_CONDITION) return best;
    const nudged = numbers(n * n);
    for (let r = 0; r < n; r++) {
      for (let c = 0; c < n; c++) {
        const weight = Math.sqrt(Math.abs(at(matrix, r * n + r) * at(matrix, c * n + c)));
        nudged[r * n + c] = at(matrix, r * n + c) + nudge * weight * pattern(r, c);
      }
    }
    const apart = decompose(nudged, n);
    if (isComplete(apart, n) && (!isComplete(best, n) || apart.condition < best.condition)) best = apart;
  }
  return best;
}
