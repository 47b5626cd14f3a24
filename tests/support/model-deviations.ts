/**
 * Keeps the worst deviation of each kind of comparison in a test file and prints them at its end, so that a run tells how near the
 * model came and not only that it passed.
 */
import { afterAll, expect } from 'vitest';

interface Worst {
  deviation: number;
  allowed: number;
  where: string;
  count: number;
}

export class Deviations {
  private readonly worst = new Map<string, Worst>();

  constructor(subject: string) {
    afterAll(() => {
      const lines = [...this.worst].map(
        ([kind, w]) => `  ${kind}: worst ${w.deviation.toExponential(1)} of ${w.count} (allowed ${w.allowed.toExponential(0)}), ${w.where}`,
      );
      if (lines.length > 0) console.info([subject, ...lines].join('\n'));
    });
  }

  private note(kind: string, deviation: number, allowed: number, where: string): void {
    const known = this.worst.get(kind);
    const count = (known?.count ?? 0) + 1;
    // a deviation that is not a number is the worst there can be
    if (known === undefined || !(deviation <= known.deviation)) this.worst.set(kind, { deviation, allowed, where, count });
    else known.count = count;
  }

  /** |actual - expected| in the quantity's own unit */
  absolute(kind: string, where: string, actual: number, expected: number, allowed: number): void {
    this.note(kind, Math.abs(actual - expected), allowed, where);
    expect(Math.abs(actual - expected), `${kind}, ${where}: ${actual} against ${expected}`).toBeLessThanOrEqual(allowed);
  }

  /** |actual / expected - 1| */
  relative(kind: string, where: string, actual: number, expected: number, allowed: number): void {
    const deviation = Math.abs(actual / expected - 1);
    this.note(kind, deviation, allowed, where);
    expect(deviation, `${kind}, ${where}: ${actual} against ${expected}`).toBeLessThanOrEqual(allowed);
  }
}
