/** Preferred values of resistors and capacitors: the E12 and E24 series of IEC 60063. */

export const E12: readonly number[] = [1, 1.2, 1.5, 1.8, 2.2, 2.7, 3.3, 3.9, 4.7, 5.6, 6.8, 8.2];
export const E24: readonly number[] = [
  1, 1.1, 1.2, 1.3, 1.5, 1.6, 1.8, 2, 2.2, 2.4, 2.7, 3, 3.3, 3.6, 3.9, 4.3, 4.7, 5.1, 5.6, 6.2, 6.8, 7.5, 8.2, 9.1,
];

/** the values of a series from `low` to `high`, both included, rising; each the decimal number it is printed as */
export function preferredValues(series: readonly number[], low: number, high: number): number[] {
  const values: number[] = [];
  for (let decade = Math.floor(Math.log10(low)); decade <= Math.ceil(Math.log10(high)); decade++) {
    for (const v of series) {
      const value = Number(`${v}e${decade}`);
      if (value >= low && value <= high) values.push(value);
    }
  }
  return values;
}
