import { describe, expect, it } from 'vitest';
import { type JudgeOptions, judgePairing, type Pairing, type Requirement, requirementBoundary } from '../../model/index.ts';
import { both, diacDrive, emulator, mains230, pairing, reservoirLamp } from '../support/model-pairings.ts';
import { ALL_CORNERS, currentAt, dimmer, emulators, NOMINAL, OHMS, PEAK, PULSE_ANGLE, resistiveLamp } from './circuits.ts';

function boundaryOf(pairing: Pairing, options: JudgeOptions): Requirement {
  const outcome = requirementBoundary(pairing, options);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.failure));
  return outcome.value;
}

const degrees = (radians: number): number => (radians * 180) / Math.PI;

/**
 * Largest holding current of a resistive lamp: conduction ends at pi - asin(IH R/Vp), which counts as a drop-out more than 30 degrees
 * before the lamp's own current ends, and that is where it falls below a twentieth of the holding current.
 */
function largestHolding(mains: number): number {
  const early = (holding: number) =>
    degrees(Math.asin((holding * OHMS) / PEAK / mains) - Math.asin((0.05 * holding * OHMS) / PEAK / mains));
  let [low, high] = [0, (PEAK * mains) / OHMS];
  for (let k = 0; k < 50; k++) {
    const middle = (low + high) / 2;
    if (early(middle) < 30) low = middle;
    else high = middle;
  }
  return low;
}

/** fired from 60 to 90 degrees: latching is hardest at 60, until the pulse ends */
const lamp = resistiveLamp(60, 90);
const largestLatching = (mains: number): number => currentAt(60 + PULSE_ANGLE, mains);

describe('the requirement boundary of a resistive lamp', () => {
  it.each([
    ['the nominal corner', NOMINAL, 1, 1],
    ['all corners, where low mains in the cold decide', ALL_CORNERS, 0.9, 1.2],
  ] as const)('follows Vp sin(alpha)/R = IL and pi - asin(IH R/Vp) at %s', (_, options, mains, cold) => {
    const { points } = boundaryOf(lamp, options);
    expect(points.length).toBeGreaterThanOrEqual(12);
    const [latching, holding] = [largestLatching(mains) / cold, largestHolding(mains) / cold];
    for (const point of points) {
      const ratio = point.holdingCurrent / point.latchingCurrent;
      expect(ratio).toBeLessThanOrEqual(1);
      // 1 % of bracketing; the lamp's own end is looked for in steps of half a degree, 1.5 % of the holding current here
      const limit = Math.min(latching, holding / ratio);
      const slack = latching < holding / ratio ? 0.012 : 0.03;
      expect(Math.abs(point.latchingCurrent / limit - 1)).toBeLessThan(slack);
      if (Math.abs((latching * ratio) / holding - 1) > 0.05) {
        expect(point.cause).toBe(latching < holding / ratio ? 'latching' : 'holding');
      }
      expect(point.smallerDoes).toBe(true);
    }
    expect(points.some((p) => p.cause === 'latching')).toBe(true);
    expect(points.some((p) => p.cause === 'holding')).toBe(true);
  });
});

describe('the requirement boundary', () => {
  const coarse = { ...ALL_CORNERS, dialPositions: [0, 25, 50, 75, 100] };
  const lamps = emulators(2, dimmer(50, 30));

  it('has a suitable pairing at every point, none a hundredth beyond, and one at half of it just where that is said, by the ordinary judgement', () => {
    const { points } = boundaryOf(lamps, coarse);
    const gradeAt = (latching: number, holding: number) => {
      const there = { ...lamps, dimmer: { ...lamps.dimmer, latchingCurrent: both(latching), holdingCurrent: both(holding) } };
      const outcome = judgePairing(there, coarse);
      return outcome.ok ? outcome.value.grade : 'refused';
    };
    for (const { latchingCurrent, holdingCurrent, failsAt, smallerDoes } of points.filter((_, k) => k % 3 === 0)) {
      expect(gradeAt(latchingCurrent, holdingCurrent)).toBe('suitable');
      expect(smallerDoes).toBe(gradeAt(latchingCurrent / 2, holdingCurrent / 2) === 'suitable');
      expect(failsAt).toBeLessThanOrEqual(1.01);
      expect(gradeAt(latchingCurrent * (failsAt ?? 1), holdingCurrent * (failsAt ?? 1))).not.toBe('suitable');
    }
  });

  it('does not depend on the currents of the dimmer that was asked about', () => {
    const other = { ...lamps, dimmer: { ...lamps.dimmer, latchingCurrent: both(0.2), typicalLatchingCurrent: both(0.1) } };
    expect(boundaryOf(other, coarse).points).toEqual(boundaryOf(lamps, coarse).points);
  });

  it('says whether the largest of both currents may be had at once', () => {
    const largest = ({ points, summary }: Requirement) => ({
      atOnce: points.some((p) =>
        points.every((q) => p.latchingCurrent >= 0.99 * q.latchingCurrent && p.holdingCurrent >= 0.99 * q.holdingCurrent),
      ),
      denied: summary.includes('not both at once'),
    });
    // here the holding current decides at every ratio
    expect(largest(boundaryOf(lamps, coarse))).toEqual({ atOnce: true, denied: false });
    // fired from the crest on it latches up to 0.996 Vp/R and holds up to 0.52 Vp/R; no ratio that is looked at has both
    expect(largest(boundaryOf(resistiveLamp(85, 90), NOMINAL))).toEqual({ atOnce: false, denied: true });
  });

  it('says where half of the currents do not do, also where only the way down of the dial and one corner show it', () => {
    const points = [0, 60, 325].map((voltage) => ({ voltage, current: voltage < 300 ? 0 : 0.052 }));
    const kneed = { ...emulator(8, mains230), load: { kind: 'iv-table' as const, points } };
    const lit = pairing(mains230, dimmer(50, 30, { drive: diacDrive({ fixedResistance: 22e3 }) }), kneed, 2);
    // dark on the way up to 20 %; at low mains the lamps wander at 5 % on the way down, with small currents as with large ones
    const boundary = boundaryOf(lit, { ...ALL_CORNERS, dialPositions: [0, 5, 10, 15, 20, 100] });
    expect(boundary.points.length).toBeGreaterThanOrEqual(12);
    expect(boundary.points.map((p) => p.smallerDoes)).toContain(false);
    expect(boundary.summary).toContain('a smaller current is not always better here');
  });

  it('says so where no currents do', () => {
    const { points, summary } = boundaryOf(pairing(mains230, dimmer(50, 30), reservoirLamp(8, 4.7e-6, 50), 2), NOMINAL);
    expect(points).toEqual([]);
    expect(summary).toMatch(/^No latching and holding currents/);
  });
});
