/** The fundamental is found by least squares: offset, noise and harmonics move it by next to nothing. */
import { describe, expect, test } from 'vitest';
import { fitFundamental } from '../../model/profiles/fundamental.ts';

const wave = (samples: number, step: number, value: (t: number) => number) =>
  Float64Array.from({ length: samples }, (_, k) => value(k * step));

describe('the fundamental', () => {
  test.each([45, 49.83, 50, 60.02, 65])('of %d Hz is found from a record of two periods', (frequency) => {
    const step = 2 / frequency / 300;
    const found = fitFundamental(
      wave(300, step, (t) => 3 + 325 * Math.sin(2 * Math.PI * frequency * t + 1)),
      step,
    );
    expect(found.frequency).toBeCloseTo(frequency, 4);
    expect(found.amplitude).toBeCloseTo(325, 3);
    expect(found.phase).toBeCloseTo(1, 4);
    expect(found.offset).toBeCloseTo(3, 3);
    expect(found.distortion).toBeLessThan(1e-4);
  });

  test('of a record of a hundred thousand samples is found over its whole length', () => {
    const found = fitFundamental(
      wave(100_000, 1e-4, (t) => 325 * Math.sin(2 * Math.PI * 50.0123 * t - 2)),
      1e-4,
    );
    expect(found.frequency).toBeCloseTo(50.0123, 6);
    expect(found.phase).toBeCloseTo(-2, 4);
  });

  test('is not mistaken for a harmonic', () => {
    const found = fitFundamental(
      wave(4000, 5e-5, (t) => 325 * Math.sin(2 * Math.PI * 50 * t) + 16 * Math.sin(2 * Math.PI * 250 * t)),
      5e-5,
    );
    expect(found.frequency).toBeCloseTo(50, 2);
    // harmonic over fundamental, both r.m.s.
    expect(found.distortion).toBeCloseTo(16 / 325, 3);
  });
});
