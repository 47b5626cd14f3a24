/**
 * What everybody who fits dimmers knows. Common practice without a published source: plausibility of the whole, never a limit.
 */
import { describe, expect, test } from 'vitest';
import { OUTPUT } from '../../model/circuit/configuration.ts';
import { sweepDial } from '../../model/observation/dial-sweep.ts';
import type { Lamp, Pairing } from '../../model/pairing.ts';
import type { DialRow } from '../../model/verdict.ts';
import {
  both,
  emulator,
  everydayDimmer,
  filament,
  linearString,
  mains230,
  pairing,
  peakOf,
  reservoirLamp,
} from '../support/model-pairings.ts';
import { goOn, startRun } from '../support/model-run.ts';

const POSITIONS = [20, 30, 40, 50, 60, 70, 80, 90, 100];

function wayUp(lamp: Lamp, count = 1, addedLoad: Pairing['addedLoad'] = null, dimmer = everydayDimmer()): DialRow[] {
  return sweepDial(pairing(mains230, dimmer, lamp, count, addedLoad), POSITIONS).rows.filter((r) => r.sweep === 'up');
}

const mostFirings = (rows: readonly DialRow[]): number[] => rows.filter((r) => r.state !== 'dark').map((r) => r.firings.max);

describe('a lamp that draws less than the triac needs', () => {
  test.each([
    ['draws like a resistor', emulator(3, mains230), 1],
    ['holds a reservoir', reservoirLamp(8, 4.7e-6, 60), 5],
    ['is a string behind a linear regulator', linearString(200, 20e-3), 2],
  ])('that %s fires once, twice, three and more times in a half-cycle as the dial is raised', (_, lamp, count) => {
    const firings = mostFirings(wayUp(lamp, count));
    expect(firings[0]).toBe(1);
    expect(firings).toContain(2);
    expect(Math.max(...firings)).toBeGreaterThanOrEqual(3);
    firings.forEach((n, k) => {
      expect(n).toBeGreaterThanOrEqual(firings[k - 1] ?? 0);
    });
  });

  test.each([
    ['draws like a resistor', emulator(3, mains230), 1],
    ['holds a reservoir', reservoirLamp(8, 4.7e-6, 60), 1],
  ])('that %s is cured by a resistive load beside it', (_, lamp, count) => {
    const cured = wayUp(lamp, count, { kind: 'resistor', resistance: 2000 });
    expect(cured.map((r) => r.state)).toEqual(POSITIONS.map(() => 'steady'));
  });

  test('runs on a dimmer whose triac needs less', () => {
    const frugal = everydayDimmer({ latchingCurrent: both(25e-3), holdingCurrent: both(14e-3) });
    expect(mostFirings(wayUp(emulator(8, mains230))).at(-1)).toBeGreaterThan(1);
    expect(wayUp(emulator(8, mains230), 1, null, frugal).map((r) => r.state)).toEqual(POSITIONS.map(() => 'steady'));
  });

  test('runs in company: two of them hold what one does not', () => {
    expect(wayUp(emulator(8, mains230), 2).map((r) => r.state)).toEqual(POSITIONS.map(() => 'steady'));
  });
});

describe('a filament lamp', () => {
  test.each([60, 15])('of %d W fires once in every half-cycle wherever it is lit', (watts) => {
    const rows = wayUp(filament(watts, mains230));
    expect(rows.map((r) => [r.firings.min, r.firings.max])).toEqual(POSITIONS.map(() => [1, 1]));
  });

  test('takes more power the higher the dial', () => {
    const powers = wayUp(filament(60, mains230)).map((r) => r.lampPower);
    powers.forEach((p, k) => {
      expect(p).toBeGreaterThan(powers[k - 1] ?? 0);
    });
    expect(powers.at(-1)).toBeLessThan(60);
  });

  test('still leaves a gap after the zero crossing at full dial, while the timing capacitor charges', () => {
    const full = wayUp(filament(60, mains230)).at(-1);
    expect(full?.firingAngle).toBeGreaterThan(10);
    expect(full?.firingAngle).toBeLessThan(35);
  });

  test('beside which the timing capacitor falls from 32 V to about 12 or 13 V at the dump', () => {
    const run = startRun(pairing(mains230, everydayDimmer(), filament(60, mains230)), 50);
    goOn(run, 10);
    const [halfCycle] = goOn(run, 1);
    const dump = halfCycle?.segments.filter((s) => s.mode.configuration.diac) ?? [];
    const last = dump.at(-1);
    expect(Math.abs(dump[0]?.value(OUTPUT.timingVoltage, 0) ?? 0)).toBeCloseTo(32, 6);
    expect(Math.abs(last?.value(OUTPUT.timingVoltage, last.duration) ?? 0)).toBeGreaterThan(12);
    expect(Math.abs(last?.value(OUTPUT.timingVoltage, last.duration) ?? 0)).toBeLessThan(14);
  });

  test('does not light on a supply too low for the diac', () => {
    const low = { ...mains230, voltage: 15 };
    const circuit = pairing(low, everydayDimmer(), filament(60, low));
    expect(peakOf(low)).toBeLessThan(22);
    expect(goOn(startRun(circuit), 20).every((h) => h.record.firings.length === 0)).toBe(true);
  });
});
