/** Linear least squares over columns that may be barred from going negative, by normal equations that the caller has summed up. */

/** Cholesky solution of the symmetric system over the columns in `kept`; zeros elsewhere */
function solveKept(matrix: Float64Array, right: Float64Array, size: number, kept: readonly number[]): Float64Array {
  const m = kept.length;
  const lower = new Float64Array(m * m);
  const y = new Float64Array(m);
  for (let r = 0; r < m; r++) {
    const row = kept[r] as number;
    for (let c = 0; c <= r; c++) {
      let sum = matrix[row * size + (kept[c] as number)] as number;
      // a column without data of its own must not make the system singular: it then comes out as 0
      if (r === c) sum += 1e-12 * (sum + 1e-300) + 1e-18;
      for (let k = 0; k < c; k++) sum -= (lower[r * m + k] as number) * (lower[c * m + k] as number);
      lower[r * m + c] = r === c ? Math.sqrt(Math.max(sum, 1e-30)) : sum / (lower[c * m + c] as number);
    }
    let sum = right[row] as number;
    for (let k = 0; k < r; k++) sum -= (lower[r * m + k] as number) * (y[k] as number);
    y[r] = sum / (lower[r * m + r] as number);
  }
  const x = new Float64Array(size);
  for (let r = m - 1; r >= 0; r--) {
    let sum = y[r] as number;
    for (let k = r + 1; k < m; k++) sum -= (lower[k * m + r] as number) * (x[kept[k] as number] as number);
    x[kept[r] as number] = sum / (lower[r * m + r] as number);
  }
  return x;
}

/** x >= 0 with (nearly) the least x'Ax/2 - b'x: columns that come out negative are taken out one round after the other */
export function solveNotNegative(matrix: Float64Array, right: Float64Array, size: number): Float64Array {
  let kept = Array.from({ length: size }, (_, k) => k);
  for (;;) {
    const x = solveKept(matrix, right, size, kept);
    const left = kept.filter((k) => (x[k] as number) >= 0);
    if (left.length === kept.length) return x;
    kept = left;
  }
}
