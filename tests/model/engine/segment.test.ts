/** Integrals and peaks of a segment against plain sampling of its own values, on every segment of generated circuits. */
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { OUTPUT } from '../../../model/circuit/configuration.ts';
import type { Segment } from '../../../model/engine/segment.ts';
import { PEAK_TOLERANCE } from '../../../model/tolerances.ts';
import { builtPairings, dialPositions, PATIENCE, runsOf } from '../../support/model-arbitrary.ts';
import { goOn, startRun } from '../../support/model-run.ts';

const NODES = [0.1834346424956498, 0.525532409916329, 0.7966664774136267, 0.9602898564975363];
const WEIGHTS = [0.362683783378362, 0.3137066458778873, 0.2223810344533745, 0.1012285362903763];

/** times that resolve a segment: pieces that double from the fastest decay on, none longer than a radian of the fastest rotation */
function pieces(segment: Segment): [number, number][] {
  const { decay, rotation } = segment.mode.linear;
  const fastest = Math.max(...decay.map(Math.abs));
  const turning = Math.max(...rotation);
  const found: [number, number][] = [];
  let length = 1 / fastest;
  for (let from = 0; from < segment.duration; ) {
    const to = Math.min(segment.duration, from + Math.min(length, 1 / turning));
    found.push([from, to]);
    from = to;
    length *= 2;
  }
  return found;
}

/** Gauss-Legendre quadrature with eight points a piece */
function quadrature(segment: Segment, of: (time: number) => number): number {
  let sum = 0;
  for (const [from, to] of pieces(segment)) {
    const [middle, half] = [(from + to) / 2, (to - from) / 2];
    NODES.forEach((x, k) => {
      sum += (WEIGHTS[k] ?? 0) * half * (of(middle + half * x) + of(middle - half * x));
    });
  }
  return sum;
}

/** half-cycles whose sampling stays affordable: no ring of megahertz lasts through them */
const affordable = (segments: readonly Segment[]): boolean =>
  segments.reduce((sum, s) => sum + s.duration * Math.max(...s.mode.linear.rotation), 0) < 2e4;

test('integrals and peaks are those of the sampled values', { timeout: PATIENCE }, () => {
  let compared = 0;
  fc.assert(
    fc.property(builtPairings, dialPositions, (pairing, dial) => {
      const run = startRun(pairing, dial);
      let halfCycles: ReturnType<typeof goOn>;
      try {
        halfCycles = goOn(run, 2);
      } catch {
        return;
      }
      for (const { segments } of halfCycles) {
        if (!affordable(segments)) continue;
        compared++;
        const closed = { charge: 0, energy: 0, squared: 0, peak: 0 };
        const sampled = { charge: 0, energy: 0, squared: 0, peak: 0, gross: 0 };
        for (const s of segments) {
          const [line, volts, lamps] = [OUTPUT.lineCurrent, OUTPUT.lampVoltage, OUTPUT.lampCurrent].map(
            (output) => (time: number) => s.value(output, time),
          ) as [(t: number) => number, (t: number) => number, (t: number) => number];
          closed.charge += s.integral(OUTPUT.lineCurrent);
          closed.energy += s.productIntegral(OUTPUT.lampVoltage, OUTPUT.lampCurrent);
          closed.squared += s.productIntegral(OUTPUT.lineCurrent, OUTPUT.lineCurrent);
          closed.peak = s.peak(OUTPUT.lineCurrent, closed.peak);
          sampled.charge += quadrature(s, line);
          sampled.energy += quadrature(s, (t) => volts(t) * lamps(t));
          sampled.gross += quadrature(s, (t) => Math.abs(volts(t) * lamps(t)));
          sampled.squared += quadrature(s, (t) => line(t) ** 2);
          for (const [from, to] of pieces(s)) {
            for (let k = 0; k <= 8; k++) sampled.peak = Math.max(sampled.peak, Math.abs(line(from + (k / 8) * (to - from))));
          }
        }
        const rms = Math.sqrt(sampled.squared * run.halfPeriod);
        expect(Math.abs(closed.charge - sampled.charge)).toBeLessThanOrEqual(1e-6 * rms + 1e-12);
        expect(Math.abs(closed.squared - sampled.squared)).toBeLessThanOrEqual(1e-6 * sampled.squared + 1e-12);
        expect(Math.abs(closed.energy - sampled.energy)).toBeLessThanOrEqual(1e-6 * sampled.gross + 1e-9);
        expect(closed.peak).toBeGreaterThanOrEqual(sampled.peak * (1 - 2 * PEAK_TOLERANCE) - 1e-9);
        // an eighth of a radian between samples hides at most 0.2 % of a crest
        expect(closed.peak).toBeLessThanOrEqual(sampled.peak * 1.003 + 1e-6);
      }
    }),
    runsOf(25),
  );
  expect(compared).toBeGreaterThan(0);
});
