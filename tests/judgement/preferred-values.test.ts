import { describe, expect, it } from 'vitest';
import { E12, E24, preferredValues } from '../../model/judgement/preferred-values.ts';

describe('preferred values (IEC 60063)', () => {
  it('holds 12 and 24 values a decade, every E12 value among the E24 values', () => {
    expect(E12).toHaveLength(12);
    expect(E24).toHaveLength(24);
    expect(E12.filter((v) => !E24.includes(v))).toEqual([]);
  });

  it.each([
    ['E12', E12, 0.05],
    ['E24', E24, 0.05],
  ])('lies within a printed digit of even ratios in %s', (_, series, tolerance) => {
    // from memory: the series is 10^(k/n) rounded to two digits, with a few historic values in the middle
    series.forEach((v, k) => {
      expect(Math.abs(v / 10 ** (k / series.length) - 1)).toBeLessThan(tolerance);
    });
  });

  it('lists the values of a range across decades, both ends included, as the decimals they are printed as', () => {
    expect(preferredValues(E12, 8200, 15e3)).toEqual([8200, 10e3, 12e3, 15e3]);
    expect(preferredValues(E12, 0.68e-9, 1.2e-9)).toEqual([0.68e-9, 0.82e-9, 1e-9, 1.2e-9]);
  });
});
