/** A lamp straight on the mains, against closed forms. */
import { describe, expect, test } from 'vitest';
import type { Lamp } from '../../model/pairing.ts';
import { reservoirCycle } from '../../model/profiles/reservoir-cycle.ts';
import { runUndimmed } from '../../model/profiles/undimmed-lamp.ts';
import { filament, lamp, reservoir } from '../ngspice/circuits.ts';

const sine = { voltage: 230, frequency: 50 };

function run(what: Lamp) {
  const found = runUndimmed(what, sine);
  if (found === null) throw new Error('does not run');
  return found;
}

describe('an undimmed lamp', () => {
  test('that is a filament draws its rated power at a power factor of 1', () => {
    const { power, powerFactor } = run(filament(60, { ...sine, sourceResistance: 0 }, { seriesResistance: 0.01 }));
    expect(power).toBeCloseTo(60, 1);
    expect(powerFactor).toBeCloseTo(1, 5);
  });

  test('with a capacitor beside a resistor has the power factor of that parallel circuit', () => {
    const [resistance, capacitance] = [6612.5, 150e-9];
    const found = run(lamp({ kind: 'resistive', resistance }, { seriesResistance: 0.01, capacitance }));
    // exact: G / |G + jwC|
    expect(found.powerFactor).toBeCloseTo(1 / Math.hypot(1, 2 * Math.PI * 50 * capacitance * resistance), 4);
    expect(found.currentAt(0)).toBeCloseTo(2 * Math.PI * 50 * capacitance * 230 * Math.SQRT2, 5);
    expect(found.currentAt(270)).toBeCloseTo((-230 * Math.SQRT2) / resistance, 5);
  });

  test.each([
    // ideal reservoir lamp: Vmin^2 = Vp^2 - (2P/C)(pi/2 + asin(Vmin/Vp))/w, current C dv/dt + P/v from there to the crest (exact; the
    // model's bridge drops 1.4 V, its resistance rounds the edge)
    [4.7e-6, 0.4940253904169866, 278.62564190683054],
    [2.2e-6, 0.5596605907372537, 227.0461918059177],
  ])('with 8 W behind %d F comes near the ideal reservoir lamp', (capacitance, powerFactor, trough) => {
    const found = run(reservoir(8, capacitance, 50, { seriesResistance: 0.2 }, 0.1));
    expect(Math.abs(found.powerFactor / powerFactor - 1)).toBeLessThan(0.02);
    const quick = reservoirCycle({ resistance: 0.3, capacitance, power: 8 }, sine);
    expect(Math.abs(quick.trough / trough - 1)).toBeLessThan(0.01);
  });

  test('gives a current whose points add up to its power and its r.m.s. value', () => {
    const found = run(reservoir(8, 4.7e-6, 50, { capacitance: 47e-9, seriesResistance: 22 }));
    let [power, squared] = [0, 0];
    for (let phase = 0; phase < 360; phase += 0.25) {
      const i = found.currentAt(phase);
      power += (i * 230 * Math.SQRT2 * Math.sin((phase * Math.PI) / 180)) / 1440;
      squared += i ** 2 / 1440;
    }
    expect(found.power).toBeCloseTo(power, 2);
    expect(found.rmsCurrent).toBeCloseTo(Math.sqrt(squared), 4);
  });
});
