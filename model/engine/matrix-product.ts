/**
 * Products of small matrices, for one length of their sums: the text of the sum is generated, so that a row's numbers stay in registers and
 * no loop runs over the three or four products that it is made of.
 */

/** into (from `to` on, rows `intoStride` apart) = a (so many rows, `aStride` apart) * b (so many columns, rows `bStride` apart) */
export type Product = (
  a: Float64Array,
  from: number,
  aStride: number,
  rows: number,
  b: Float64Array,
  fromB: number,
  bStride: number,
  columns: number,
  into: Float64Array,
  to: number,
  intoStride: number,
) => void;

const known: (Product | undefined)[] = [];

/** the product whose sums have `length` parts */
export function productOf(length: number): Product {
  const made = known[length];
  if (made !== undefined) return made;
  const parts = Array.from({ length }, (_, k) => k);
  const product = new Function(`'use strict';
return function product(a, from, aStride, rows, b, fromB, bStride, columns, into, to, intoStride) {
  for (let r = 0; r < rows; r++, from += aStride, to += intoStride) {
    ${parts.map((k) => `const a${k} = a[from + ${k}];`).join(' ')}
    for (let c = 0; c < columns; c++) {
      const at = fromB + c;
      into[to + c] = ${parts.map((k) => `a${k} * b[at + ${k} * bStride]`).join(' + ') || '0'};
    }
  }
};`)() as Product;
  known[length] = product;
  return product;
}
