/**
 * The deck itself against formulas, before anything is compared with it: R-C-diac timing from a stiff sine, the limits of latching and
 * holding into a resistor, the fall of the timing capacitor at a dump. Runs only where ngspice is installed.
 */
import { describe, expect, test } from 'vitest';
import type { Dimmer, Pairing } from '../../model/pairing.ts';
import { choke, diac, dimmer, europe, filament, lamp, pairing, timed } from './circuits.ts';
import { ngspiceVersion, runNgspice } from './run.ts';

const missing = ngspiceVersion() === null;
const stiff = { ...europe, sourceResistance: 0.001 };
const plain = {
  turnOffTime: 0,
  onVoltage: 0,
  onResistance: 0.01,
  snubber: null,
  choke: { inductance: 0, resistance: 0, lossResistance: null },
};

/** A lamp of next to no resistance beside the timing resistor; a dump that ends at 22 V and takes next to no time. */
function rcDiac(resistance: number, change: Partial<Dimmer> = {}): Pairing {
  const drive = {
    ...diac,
    fixedResistance: resistance,
    potentiometer: 0,
    residualVoltage: 21.945,
    gateVoltage: 0,
    diacResistance: 1,
    gateResistance: 10,
  };
  return pairing(stiff, dimmer(50, 30, { ...plain, drive, ...change }), [[1, lamp({ kind: 'resistive', resistance: 20 })]]);
}

/** Angle of the first crossing of 32 V from zero: Vc = A sin(x - phi) + A sin(phi) exp(-x/wRC), A = Vp/sqrt(1 + (wRC)^2), phi = atan wRC. */
function firstAngle(resistance: number): number {
  const w = 2 * Math.PI * 50 * resistance * 100e-9;
  const [amplitude, phi] = [(Math.SQRT2 * 230) / Math.hypot(1, w), Math.atan(w)];
  const voltage = (x: number) => amplitude * (Math.sin(x - phi) + Math.sin(phi) * Math.exp(-x / w));
  let [low, high] = [0, phi + Math.PI / 2];
  for (let n = 0; n < 60; n++) {
    const middle = (low + high) / 2;
    if (voltage(middle) < 32) low = middle;
    else high = middle;
  }
  return (low * 180) / Math.PI;
}

describe.skipIf(missing)(missing ? 'skipped: the program ngspice is not installed' : 'the ngspice deck', () => {
  test.each([
    // settled angles: firing at 32 V, 10 V less after the dump, decay through R until the line reverses (exact, recomputed by bisection)
    [20e3, 22.44048523886479],
    [100e3, 55.19348248425193],
    [250e3, 103.17848762248722],
  ])('fires at the closed form of an R-C-diac network of %d Ohm', async (resistance, settled) => {
    const run = await runNgspice(rcDiac(resistance), 100, { halfCycles: 8 });
    expect(run[0]?.firingAngles[0]).toBeCloseTo(firstAngle(resistance), 1);
    expect(Math.abs((run[7]?.firingAngles[0] ?? 0) - settled)).toBeLessThan(0.05);
  });

  test('keeps firing from a fresh start up to 374 kOhm and goes out above it', async () => {
    // 230 V, 32 V, 100 nF, 10 V less after each dump: the largest resistance at which a settled firing angle exists (exact, to 1 kOhm)
    const kept = await runNgspice(rcDiac(373e3), 100, { halfCycles: 20 });
    const lost = await runNgspice(rcDiac(380e3), 100, { halfCycles: 20 });
    expect(kept.slice(16).every(({ firingAngles }) => firingAngles.length === 1)).toBe(true);
    expect(lost.slice(16).every(({ firingAngles }) => firingAngles.length === 0)).toBe(true);
  });

  test.each([
    [54.2, false],
    [54.6, true],
    [125.4, true],
    [125.8, false],
  ])('latches into 10 W when fired at %d degrees: %s', async (angle, latches) => {
    const drive = { ...timed, firingAngleFull: angle, firingAngleLow: angle, gatePulse: 1e-6 };
    const circuit = pairing(stiff, dimmer(50, 30, { ...plain, drive }), [[1, filament(10, stiff)]]);
    const run = await runNgspice(circuit, 100, { halfCycles: 2 });
    for (const { conductionEnds } of run) expect(conductionEnds[0]).toBeCloseTo(latches ? 150.797 : angle + 0.018, 2);
  });

  test('lets the timing capacitor fall from 32 V to about 13 V at a dump', async () => {
    const run = await runNgspice(pairing(europe, dimmer(50, 30, { choke: choke(1e-4) }), [[1, filament(60, europe)]]), 50, {
      halfCycles: 3,
    });
    for (const { dump } of run) {
      expect(dump?.from).toBeCloseTo(32, 2);
      expect(dump?.to).toBeGreaterThan(12.9);
      expect(dump?.to).toBeLessThan(13.6);
    }
  });
});
