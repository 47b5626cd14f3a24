/** Sweeping the dial and summing up what was seen, on circuits whose figures are known in closed form. */
import { describe, expect, test } from 'vitest';
import { DialObserver, OBSERVATION_PLAN } from '../../../model/observation/dial-observation.ts';
import { sweepDial, sweepStops } from '../../../model/observation/dial-sweep.ts';
import type { Pairing } from '../../../model/pairing.ts';
import type { DialRow } from '../../../model/verdict.ts';
import {
  both,
  diacDrive,
  everydayDimmer,
  filament,
  firedAt,
  idealDimmer,
  mains230,
  pairing,
  peakOf,
  reservoirLamp,
  resistor,
  stiff,
  timedDrive,
} from '../../support/model-pairings.ts';
import { startRun } from '../../support/model-run.ts';

const mains = stiff(230, 50);
const only = (p: Pairing, plan = OBSERVATION_PLAN): DialRow => sweepDial(p, [50], plan).rows[0] as DialRow;

describe('the stops of a sweep', () => {
  test('go up and come down again from the top', () => {
    expect(sweepStops([0, 50, 100])).toEqual([
      { sweep: 'up', position: 0 },
      { sweep: 'up', position: 50 },
      { sweep: 'up', position: 100 },
      { sweep: 'down', position: 100 },
      { sweep: 'down', position: 50 },
      { sweep: 'down', position: 0 },
    ]);
  });

  test('are one for one position alone', () => {
    expect(sweepStops([30])).toEqual([{ sweep: 'up', position: 30 }]);
  });
});

describe('a dial row', () => {
  test('of a resistor fired at the crest holds the closed forms', () => {
    const row = only(pairing(mains, idealDimmer({ drive: firedAt(90) }), resistor(100)));
    expect(row).toMatchObject({ state: 'steady', alsoStates: [], firings: { min: 1, mean: 1, max: 1 }, silentShare: 0, repeatsAfter: 1 });
    expect(row.firingAngle).toBeCloseTo(90, 6);
    expect(row.conductionAngle).toBeCloseTo(90, 2);
    expect(row.lampPower / (230 ** 2 / 100 / 2)).toBeCloseTo(1, 3);
    expect(row.rmsCurrent / (2.3 * Math.SQRT1_2)).toBeCloseTo(1, 3);
    expect(row.peakCurrent / (peakOf(mains) / 100)).toBeCloseTo(1, 3);
    expect(Math.abs(row.dcCurrent)).toBeLessThan(1e-6);
    expect(row.polarityDifference).toBeLessThan(1e-6);
  });

  test('of a timed drive fires on the straight line between its two angles', () => {
    const circuit = pairing(mains, idealDimmer({ drive: timedDrive({ firingAngleFull: 20, firingAngleLow: 140 }) }), resistor(100));
    const angles = sweepDial(circuit, [0, 25, 100]).rows.filter((r) => r.sweep === 'up');
    [140, 110, 20].forEach((angle, k) => {
      expect(angles[k]?.firingAngle).toBeCloseTo(angle, 6);
    });
  });

  test('of an unequal diac is lopsided and carries direct current', () => {
    const drive = diacDrive({ breakover: { positive: 32, negative: 36 } });
    const row = only(pairing(mains230, everydayDimmer({ drive }), filament(60, mains230)));
    expect(row.state).toBe('lopsided');
    expect(row.polarityDifference).toBeGreaterThan(0.0125);
    // the lower breakover fires the positive half-cycles earlier
    expect(row.dcCurrent).toBeGreaterThan(0);
    expect(row.repeatsAfter).toBe(2);
  });

  test('of a lamp that never fires is dark, without angles', () => {
    const drive = diacDrive({ breakover: both(1000) });
    const row = only(pairing(mains230, everydayDimmer({ drive }), filament(60, mains230)));
    expect(row).toMatchObject({ state: 'dark', silentShare: 1, firingAngle: null, firingAngleSpread: null, conductionAngle: null });
    expect(row.lampPower).toBeLessThan(0.5);
  });
});

describe('a drop-out', () => {
  // 10 W held to 30 mA let go at 150.8 degrees (closed form); their own current falls under 1.5 mA at 178.6
  const circuit = pairing(
    mains,
    idealDimmer({ latchingCurrent: both(50e-3), holdingCurrent: both(30e-3), drive: firedAt(90) }),
    resistor(5290),
  );

  test.each([
    [10, 'dropping-out', 1],
    [27, 'dropping-out', 1],
    [29, 'steady', 0],
  ])('counts where conduction ends more than %d degrees before the lamp would have let go: %s', (dropOutAngle, state, count) => {
    expect(only(circuit, { ...OBSERVATION_PLAN, dropOutAngle })).toMatchObject({ state, earlyDropOuts: count });
  });

  test('does not count where the lamp itself stops drawing: a reservoir lamp is full', () => {
    const drive = firedAt(60);
    const lamp = reservoirLamp(8, 4.7e-6, 60);
    const row = only(pairing(mains, idealDimmer({ latchingCurrent: both(5e-3), holdingCurrent: both(2e-3), drive }), lamp, 5));
    expect(row.conductionAngle).toBeLessThan(60);
    expect(row.earlyDropOuts).toBe(0);
  });
});

describe('an observation', () => {
  test('carries the state over: on the way down a lamp stays lit where it was dark on the way up', () => {
    // what has never fired stays dark above 322 kOhm (32 V, 100 nF, 230 V: closed form), which is 75 % of this dial; turning it swings
    // the timing voltage a little, so the last step up may light it a position early
    const drive = diacDrive({ fixedResistance: 1e5, potentiometer: 9e5 });
    const positions = [0, 60, 68, 70, 72, 74, 76, 80, 100];
    const { rows } = sweepDial(pairing(mains230, everydayDimmer({ drive, snubber: null }), filament(60, mains230)), positions);
    const lowest = (sweep: 'up' | 'down') =>
      Math.min(...rows.filter((r) => r.sweep === sweep && r.state !== 'dark').map((r) => r.position));
    expect([74, 76]).toContain(lowest('up'));
    expect(lowest('down')).toBeLessThan(lowest('up'));
  });

  test('ends early once the pattern repeats, and observes whole patterns of both polarities', () => {
    const observer = new DialObserver(startRun(pairing(mains230, everydayDimmer(), filament(60, mains230))));
    const { halfCycles, repeatsAfter, settled } = observer.observe(50);
    expect(repeatsAfter).toBe(1);
    expect(halfCycles).toHaveLength(2);
    expect(settled).toBeLessThan(OBSERVATION_PLAN.settle);
    expect(halfCycles.map((h) => h.record.index % 2).sort()).toEqual([0, 1]);
  });

  test('lets one half-cycle stand for both polarities only where it shows what simulating the other one shows', () => {
    for (const lamp of [filament(60, mains230), filament(15, mains230)]) {
      const judged = pairing(mains230, everydayDimmer(), lamp);
      const listened = new DialObserver(startRun(judged), OBSERVATION_PLAN, { segment: () => undefined });
      const mirrored = new DialObserver(startRun(judged));
      for (const position of [20, 50, 80, 100, 40]) {
        const [both, one] = [listened.observe(position), mirrored.observe(position)];
        expect(one.repeatsAfter).toBe(both.repeatsAfter);
        const inPolarity = ({ halfCycles }: typeof both) => halfCycles.toSorted((a, b) => (a.record.index % 2) - (b.record.index % 2));
        for (const [k, seen] of inPolarity(one).entries()) {
          const simulated = inPolarity(both)[k] as typeof seen;
          expect(seen.record.firings).toHaveLength(simulated.record.firings.length);
          expect(seen.record.conduction).toBeCloseTo(simulated.record.conduction, 3);
          expect(seen.measures.charge).toBeCloseTo(simulated.measures.charge, 8);
          expect(seen.measures.lampEnergy).toBeCloseTo(simulated.measures.lampEnergy, 5);
          expect(seen.earlyDropOuts).toBe(simulated.earlyDropOuts);
        }
      }
      expect(mirrored.run.index).toBeLessThan(listened.run.index);
    }
  });

  test('simulates both polarities where the dimmer treats them differently', () => {
    const unequal = everydayDimmer({ latchingCurrent: { positive: 0.05, negative: 0.051 } });
    const { halfCycles } = new DialObserver(startRun(pairing(mains230, unequal, filament(60, mains230)))).observe(50);
    const [first, second] = halfCycles;
    expect(first?.record.index).not.toBe(second?.record.index);
    expect(first?.margins.latching).not.toBeCloseTo(second?.margins.latching ?? 0, 4);
  });

  test('counts its work', () => {
    const { counters } = sweepDial(pairing(mains230, everydayDimmer(), filament(60, mains230)), [40, 60]);
    expect(counters.halfCycles).toBeGreaterThanOrEqual(4 * 3);
    expect(counters.events).toBeGreaterThan(counters.halfCycles);
    expect(counters.steps).toBeGreaterThan(counters.events);
    expect(counters.modesBuilt).toBeGreaterThan(0);
  });
});
