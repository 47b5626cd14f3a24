/** Piecewise-linear lamp curves: what a table, a resistor, a bleeder and a drain come out as at the lamp's input. */
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  bleederCurve,
  type Curve,
  curveAt,
  curveFalls,
  drainCurve,
  largerCurve,
  resistorCurve,
  tableCurve,
} from '../../../model/circuit/lamp-curve.ts';
import { BLEEDER_RELEASE, BLEEDER_START, BRIDGE_DROP, CURVE_START, DRAIN_FADE, DRAIN_RATIO } from '../../../model/tolerances.ts';

const point = (voltage: number, current: number) => ({ voltage, current });

/** at every breakpoint the segments on both sides give the same current, and the breakpoints rise */
function expectContinuous(curve: Curve): void {
  curve.forEach((s, k) => {
    const before = curve[k - 1];
    if (before === undefined) return;
    expect(s.from).toBeGreaterThan(before.from);
    const current = s.slope * s.from + s.offset;
    const scale = Math.max(1e-3, Math.abs(before.slope * s.from), Math.abs(s.slope * s.from));
    expect(Math.abs(before.slope * s.from + before.offset - current)).toBeLessThan(1e-12 * scale);
  });
}

const tables = fc
  .array(fc.record({ step: fc.double({ min: 0.5, max: 60, noNaN: true }), current: fc.double({ min: 0, max: 0.2, noNaN: true }) }), {
    minLength: 2,
    maxLength: 64,
  })
  .chain((steps) =>
    fc.boolean().map((fromZero) => {
      let voltage = fromZero ? 0 : (steps[0]?.step ?? 1);
      return steps.map(({ step, current }, k) => {
        if (k > 0) voltage += step;
        return point(voltage, current);
      });
    }),
  );

describe('the curve of a table', () => {
  test('starts at no current at no voltage and is shifted by the drop of the bridge', () => {
    const curve = tableCurve([point(60, 0), point(325, 0.052)]);
    expect(curveAt(curve, 0)).toBe(0);
    expect(curveAt(curve, 60 + BRIDGE_DROP)).toBeCloseTo(0, 12);
    expect(curveAt(curve, 325 + BRIDGE_DROP)).toBeCloseTo(0.052, 12);
    expect(curveAt(curve, 192.5 + BRIDGE_DROP)).toBeCloseTo(0.026, 12);
  });

  test('a current at 0 V rises to it inside the drop of the bridge', () => {
    const curve = tableCurve([point(0, 0.02), point(100, 0.02)]);
    expect(curveAt(curve, BRIDGE_DROP - CURVE_START)).toBeCloseTo(0, 12);
    expect(curveAt(curve, BRIDGE_DROP)).toBeCloseTo(0.02, 12);
    expect(curveAt(curve, 500)).toBeCloseTo(0.02, 12);
  });

  test('goes on rising beyond its last point, and stays where it last fell', () => {
    expect(curveAt(tableCurve([point(10, 0.01), point(20, 0.02)]), 40 + BRIDGE_DROP)).toBeCloseTo(0.04, 12);
    expect(curveAt(tableCurve([point(10, 0.02), point(20, 0.01)]), 40 + BRIDGE_DROP)).toBeCloseTo(0.01, 12);
  });

  test('passes through every point, is continuous and never negative, whatever the table', () => {
    fc.assert(
      fc.property(tables, (points) => {
        const curve = tableCurve(points);
        expectContinuous(curve);
        for (const p of points) {
          if (p.voltage > 0) expect(Math.abs(curveAt(curve, p.voltage + BRIDGE_DROP) - p.current)).toBeLessThan(1e-10);
          expect(curveAt(curve, p.voltage)).toBeGreaterThanOrEqual(-1e-10);
        }
      }),
    );
  });

  test('says whether any part of it falls', () => {
    expect(curveFalls(tableCurve([point(50, 0.1), point(100, 0.05), point(200, 0.06)]))).toBe(true);
    expect(curveFalls(tableCurve([point(50, 0.05), point(100, 0.05), point(200, 0.06)]))).toBe(false);
  });
});

describe('the curve of an active bleeder', () => {
  test('draws its current from the start span up to its level and lets go above it', () => {
    const curve = bleederCurve(0.03, 80);
    expectContinuous(curve);
    expect(curveAt(curve, BRIDGE_DROP)).toBeCloseTo(0, 12);
    expect(curveAt(curve, BRIDGE_DROP + BLEEDER_START / 2)).toBeCloseTo(0.015, 12);
    for (const v of [BLEEDER_START, 40, 80]) expect(curveAt(curve, BRIDGE_DROP + v)).toBeCloseTo(0.03, 12);
    for (const v of [80 + BLEEDER_RELEASE, 200, 400]) expect(curveAt(curve, BRIDGE_DROP + v)).toBeCloseTo(0, 12);
  });

  test('keeps to a level below its start span', () => {
    const curve = bleederCurve(0.03, 3);
    expectContinuous(curve);
    expect(curveAt(curve, BRIDGE_DROP + 3)).toBeCloseTo(0.03, 12);
    expect(curveAt(curve, BRIDGE_DROP + 3 + BLEEDER_RELEASE)).toBeCloseTo(0, 12);
  });
});

describe('the larger of two curves', () => {
  test('is the larger one at every voltage and continuous, whatever the curves', () => {
    const bleeders = fc.record({
      current: fc.double({ min: 1e-3, max: 0.2, noNaN: true }),
      below: fc.double({ min: 1, max: 300, noNaN: true }),
    });
    fc.assert(
      fc.property(tables, bleeders, fc.double({ min: 0, max: 1500, noNaN: true }), (points, { current, below }, v) => {
        const [a, b] = [tableCurve(points), bleederCurve(current, below)];
        const larger = largerCurve(a, b);
        expectContinuous(larger);
        expect(Math.abs(curveAt(larger, v) - Math.max(curveAt(a, v), curveAt(b, v)))).toBeLessThan(1e-9);
      }),
    );
  });

  test('has a corner where a resistor overtakes a bleeder', () => {
    const larger = largerCurve(resistorCurve(1000), bleederCurve(0.05, 200));
    expect(larger.map((s) => s.from)).toContainEqual(expect.closeTo(50, 9));
    expect(curveAt(larger, 20)).toBeCloseTo(0.05, 12);
    expect(curveAt(larger, 60)).toBeCloseTo(0.06, 12);
  });
});

describe('the drain of a reservoir', () => {
  test('constant power stays within half a chord of P/v above the minimum voltage, over and under', () => {
    const chord = (Math.sqrt(DRAIN_RATIO) - 1 / Math.sqrt(DRAIN_RATIO)) ** 2 / 8;
    const curve = drainCurve({ kind: 'power', power: 8 }, 60, 325);
    expectContinuous(curve);
    let [least, most] = [0, 0];
    for (let v = 60; v <= 2 * 325; v += 0.1) {
      const error = (curveAt(curve, v) * v) / 8 - 1;
      least = Math.min(least, error);
      most = Math.max(most, error);
    }
    expect(least).toBeGreaterThan(-chord * 1.01);
    expect(most).toBeLessThan(chord * 1.01);
    expect(most - least).toBeGreaterThan(chord);
  });

  test('constant current is constant above the minimum voltage and fades out below it', () => {
    const curve = drainCurve({ kind: 'current', current: 0.03 }, 100, 325);
    expectContinuous(curve);
    expect(curveAt(curve, 100)).toBeCloseTo(0.03, 12);
    expect(curveAt(curve, 600)).toBeCloseTo(0.03, 12);
    expect(curveAt(curve, 100 * (1 - DRAIN_FADE / 2))).toBeCloseTo(0.015, 12);
    expect(curveAt(curve, 100 * (1 - DRAIN_FADE))).toBeCloseTo(0, 12);
    expect(curveAt(curve, 10)).toBe(0);
  });
});
