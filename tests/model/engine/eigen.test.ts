/** The modal basis of real matrices: it must diagonalise what it is given, and come near it where nothing diagonalises it. */
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { type ModalBasis, modalBasis } from '../../../model/engine/eigen.ts';
import { DEFECT_NUDGES, MODE_CONDITION } from '../../../model/tolerances.ts';

const norm = (m: ArrayLike<number>): number => Math.sqrt(Array.from(m).reduce((sum, x) => sum + x * x, 0));

function multiply(a: Float64Array, b: Float64Array, n: number): Float64Array {
  const product = new Float64Array(n * n);
  for (let r = 0; r < n; r++) {
    for (let c = 0; c < n; c++) {
      for (let k = 0; k < n; k++) product[r * n + c] = (product[r * n + c] ?? 0) + (a[r * n + k] ?? 0) * (b[k * n + c] ?? 0);
    }
  }
  return product;
}

/** the block-diagonal matrix of the modes: decays, and [d, -q; q, d] for a pair */
function blocks(m: ModalBasis, n: number): Float64Array {
  const d = new Float64Array(n * n);
  for (let k = 0; k < m.reals; k++) d[k * n + k] = m.decay[k] ?? 0;
  for (let p = 0; p < m.pairs; p++) {
    const k = m.reals + 2 * p;
    d[k * n + k] = m.decay[m.reals + p] ?? 0;
    d[(k + 1) * n + k + 1] = m.decay[m.reals + p] ?? 0;
    d[k * n + k + 1] = -(m.rotation[m.reals + p] ?? 0);
    d[(k + 1) * n + k] = m.rotation[m.reals + p] ?? 0;
  }
  return d;
}

/** relative distance of basis * blocks * inverse from the matrix, and of basis * inverse from one */
function errors(matrix: Float64Array, n: number): { rebuilt: number; inverse: number; modal: ModalBasis } {
  const modal = modalBasis(matrix, n);
  expect(modal.reals + 2 * modal.pairs).toBe(n);
  const rebuilt = multiply(multiply(modal.basis, blocks(modal, n), n), modal.inverse, n);
  const unit = multiply(modal.basis, modal.inverse, n).map((x, k) => x - (k % (n + 1) === 0 ? 1 : 0));
  return { rebuilt: norm(rebuilt.map((x, k) => x - (matrix[k] ?? 0))) / (norm(matrix) || 1), inverse: norm(unit), modal };
}

const square = (entries: readonly (readonly number[])[]): Float64Array => Float64Array.from(entries.flat());

/** reflection at the plane across v: an orthogonal matrix that is its own inverse */
function mirror(v: readonly number[]): Float64Array {
  const length = v.reduce((sum, x) => sum + x * x, 0);
  return square(v.map((x, r) => v.map((y, c) => (r === c ? 1 : 0) - (2 * x * y) / length)));
}

/** rounding, amplified by the condition of the basis; a nudged matrix differs by its nudge besides */
const allowed = (condition: number): number => 1e-13 * condition + 2 * (DEFECT_NUDGES.at(-1) ?? 0);

describe('the modal basis', () => {
  test('rebuilds random matrices of every size to rounding', () => {
    const entry = fc.integer({ min: -1000, max: 1000 }).map((x) => x / 1000);
    const matrices = fc
      .integer({ min: 1, max: 14 })
      .chain((n) => fc.array(entry, { minLength: n * n, maxLength: n * n }).map((m) => ({ n, m: Float64Array.from(m) })))
      // a circuit always leaks: a matrix of nothing but zeros does not occur
      .filter(({ m }) => m.some((x) => x !== 0));
    fc.assert(
      fc.property(matrices, ({ n, m }) => {
        const { rebuilt, inverse, modal } = errors(m, n);
        expect(rebuilt).toBeLessThan(allowed(modal.condition));
        expect(inverse).toBeLessThan(1e-13 * modal.condition + 1e-13);
      }),
    );
  });

  test('finds the eigenvalues of widely spread decays, as circuits have them', () => {
    const decays = [-1e1, -3e3, -2e5, -4e6, -1e8];
    const n = decays.length;
    const diagonal = square(decays.map((d, r) => decays.map((_, c) => (r === c ? d : 0))));
    const turn = mirror([1, -2, 0.5, 3, -1]);
    const found = [...modalBasis(multiply(multiply(turn, diagonal, n), turn, n), n).decay.subarray(0, n)].sort((a, b) => b - a);
    // a slow decay beside a fast one is found to rounding of the fast one
    found.forEach((d, k) => {
      expect(Math.abs(d - (decays[k] ?? 0))).toBeLessThan(1e-6);
    });
  });

  test('finds the pair of a series R-L-C ring', () => {
    const [resistance, inductance, capacitance] = [20, 1e-3, 47e-9];
    const scaled = 1 / Math.sqrt(inductance * capacitance);
    const m = square([
      [-resistance / inductance, -scaled],
      [scaled, 0],
    ]);
    const modal = modalBasis(m, 2);
    expect([modal.reals, modal.pairs]).toEqual([0, 1]);
    expect(modal.decay[0]).toBeCloseTo(-resistance / inductance / 2, 6);
    expect(modal.rotation[0]).toBeCloseTo(Math.sqrt(scaled ** 2 - (resistance / inductance / 2) ** 2), 6);
  });

  test('takes repeated eigenvalues with full eigenvectors as they are', () => {
    const twins = square([
      [-5, 0, 0],
      [0, -5, 0],
      [0, 0, -7],
    ]);
    const { rebuilt, modal } = errors(twins, 3);
    expect(rebuilt).toBeLessThan(1e-14);
    expect(modal.condition).toBeLessThan(2);
    // a symmetric matrix with a triple eigenvalue, turned away from the axes
    const turn = mirror([1, -2, 0.5, 3]);
    const turned = multiply(
      multiply(
        turn,
        square([
          [-2, 0, 0, 0],
          [0, -2, 0, 0],
          [0, 0, -2, 0],
          [0, 0, 0, -9],
        ]),
        4,
      ),
      turn,
      4,
    );
    expect(errors(turned, 4).rebuilt).toBeLessThan(1e-6);
  });

  test.each([
    [
      'critical damping',
      square([
        [-2, -1],
        [1, 0],
      ]),
      2,
    ],
    [
      'a chain of three',
      square([
        [-1, 1, 0],
        [0, -1, 1],
        [0, 0, -1],
      ]),
      3,
    ],
    [
      'two equal pairs that feed each other',
      square([
        [-1, -9, 1, 0],
        [9, -1, 0, 1],
        [0, 0, -1, -9],
        [0, 0, 9, -1],
      ]),
      4,
    ],
  ])('comes near a defective matrix with a basis that can be used: %s', (_, matrix, n) => {
    const { rebuilt, modal } = errors(matrix, n);
    expect(rebuilt).toBeLessThan(1e-5);
    expect(modal.condition).toBeLessThan(100 * MODE_CONDITION);
  });

  test('handles the empty and the single-state circuit', () => {
    expect(modalBasis(new Float64Array(0), 0)).toMatchObject({ reals: 0, pairs: 0 });
    expect(modalBasis(Float64Array.of(-3), 1).decay[0]).toBe(-3);
    expect(modalBasis(Float64Array.of(0), 1).decay[0]).toBe(0);
  });
});
