/**
 * Worked examples of textbooks and a printed statement of an application note. The note's other sum, an R-C trigger fed from direct
 * voltage, has no counterpart in a circuit on the mains and is left out.
 */
import { describe, expect, test } from 'vitest';
import { OUTPUT } from '../../../model/circuit/configuration.ts';
import type { Pairing } from '../../../model/pairing.ts';
import { Deviations } from '../../support/model-deviations.ts';
import { both, firedAt, idealDimmer, pairing, peakOf, resistor, SWITCH_RESISTANCE, stiff } from '../../support/model-pairings.ts';
import { goOn, runFromRest, startRun, total } from '../../support/model-run.ts';
import data from './textbook-examples.cases.json' with { type: 'json' };

const deviations = new Deviations('textbook examples');
const IN_PATH = 2e-3 + SWITCH_RESISTANCE;
/** figures are printed to four digits or so */
const PRINTED = 3e-4;

interface Figures {
  readonly lampVoltage: number;
  readonly current: number;
  readonly power: number;
  readonly powerFactor: number;
  readonly thyristorRms: number;
  readonly thyristorMean: number;
}

/** over one settled cycle; a thyristor carries one polarity */
function figures(circuit: Pairing): Figures {
  const run = startRun(circuit);
  goOn(run, 20);
  const cycle = goOn(run, 2);
  const period = 1 / circuit.mains.frequency;
  const mean = (a: number, b: number): number => cycle.reduce((sum, h) => sum + total(h, (s) => s.productIntegral(a, b)), 0) / period;
  const current = Math.sqrt(mean(OUTPUT.lineCurrent, OUTPUT.lineCurrent));
  const power = mean(OUTPUT.lampVoltage, OUTPUT.lampCurrent);
  let forward = 0;
  for (const h of cycle) {
    forward += total(h, (s) => (s.value(OUTPUT.triacCurrent, s.duration / 2) > 0 ? s.integral(OUTPUT.triacCurrent) : 0));
  }
  return {
    lampVoltage: Math.sqrt(mean(OUTPUT.lampVoltage, OUTPUT.lampVoltage)),
    current,
    power,
    powerFactor: power / (circuit.mains.voltage * current),
    thyristorRms: current / Math.SQRT2,
    thyristorMean: forward / period,
  };
}

describe.each([data.resistive, data.givenPower])('$source', (c) => {
  test('gives the printed figures', () => {
    const dimmer = idealDimmer({ drive: firedAt(c.firingAngle_deg) });
    const f = figures(pairing(stiff(c.voltage_V, c.frequency_Hz), dimmer, resistor(c.resistance_Ohm - IN_PATH)));
    const where = `${c.resistance_Ohm} Ohm`;
    deviations.relative('voltage (relative)', where, f.lampVoltage, c.lampVoltage_V, 2 * PRINTED);
    deviations.relative('current (relative)', where, f.current, c.current_A, PRINTED);
    deviations.relative('power (relative)', where, f.power, c.power_W, 2 * PRINTED);
    deviations.relative('power factor (relative)', where, f.powerFactor, c.powerFactor, 1e-3);
    deviations.relative('thyristor, r.m.s. (relative)', where, f.thyristorRms, c.thyristorRms_A, PRINTED);
    deviations.relative('thyristor, mean (relative)', where, f.thyristorMean, c.thyristorMean_A, 1e-3);
  });
});

describe(data.inductive.source, () => {
  const c = data.inductive;
  const dimmer = idealDimmer({
    drive: firedAt(c.firingAngle_deg),
    choke: { inductance: c.inductance_mH * 1e-3, resistance: 1e-3, lossResistance: 1e9 },
  });
  const circuit = pairing(stiff(c.voltage_V, c.frequency_Hz), dimmer, resistor(c.resistance_Ohm - IN_PATH));

  test('the current ends at the printed extinction angle, beyond the zero crossing', () => {
    // a conduction ends in the half-cycle after its own: the last one run is still open
    for (const { record } of runFromRest(circuit, 7).slice(0, 6)) {
      deviations.absolute('extinction (degrees)', 'R-L', record.ends[0] as number, c.extinction_deg, 0.005);
      deviations.absolute('conduction (degrees)', 'R-L', record.conduction, c.conduction_deg, 0.005);
    }
  });

  test('and at the root of its closed form as near as the switch lets go', () => {
    const impedanceAngle = Math.atan((2 * Math.PI * c.frequency_Hz * c.inductance_mH * 1e-3) / c.resistance_Ohm);
    const slowness = Math.tan(impedanceAngle);
    const current = (x: number): number =>
      Math.sin(x - impedanceAngle) - Math.sin(Math.PI / 2 - impedanceAngle) * Math.exp((Math.PI / 2 - x) / slowness);
    let [low, high] = [Math.PI, 1.5 * Math.PI];
    for (let k = 0; k < 60; k++) {
      const middle = (low + high) / 2;
      if (current(middle) > 0) low = middle;
      else high = middle;
    }
    const [first] = runFromRest(circuit, 2);
    // the switch lets go at 0.1 mA, 1e-4 degrees before the zero
    deviations.absolute(
      'extinction against the closed form (degrees)',
      'R-L',
      first?.record.ends[0] as number,
      (low * 180) / Math.PI,
      3e-4,
    );
  });

  test('gives the printed figures, the voltage across resistor and inductor together', () => {
    const f = figures(circuit);
    deviations.relative('R-L: current (relative)', 'R-L', f.current, c.current_A, PRINTED);
    deviations.relative('R-L: thyristor, r.m.s. (relative)', 'R-L', f.thyristorRms, c.thyristorRms_A, PRINTED);
    deviations.relative('R-L: thyristor, mean (relative)', 'R-L', f.thyristorMean, c.thyristorMean_A, PRINTED);
    // the sums take all resistance for load
    const power = f.current ** 2 * c.resistance_Ohm;
    deviations.relative('R-L: power (relative)', 'R-L', power, c.power_W, 2 * PRINTED);
    deviations.relative('R-L: power factor (relative)', 'R-L', power / (c.voltage_V * f.current), c.powerFactor, 1e-3);
  });
});

describe(data.latchingDelay.source, () => {
  const c = data.latchingDelay;
  const latchesWithin = (pulse: number, frequency: number): boolean => {
    const dimmer = idealDimmer({
      latchingCurrent: both(c.latchingCurrent_A),
      drive: firedAt(c.firingAngle_deg, { gatePulse: pulse }),
      choke: { inductance: c.inductance_mH * 1e-3, resistance: 1e-3, lossResistance: 1e9 },
    });
    const circuit = pairing(stiff(c.voltage_V, frequency), dimmer, resistor(c.resistance_Ohm - IN_PATH));
    return runFromRest(circuit, 1)[0]?.record.failedLatches === 0;
  };
  const shortestPulse = (frequency: number): number => {
    let [low, high] = [1e-6, 1e-3];
    while (high - low > 1e-11) {
      const middle = (low + high) / 2;
      if (latchesWithin(middle, frequency)) high = middle;
      else low = middle;
    }
    return high;
  };

  test('the shortest pulse that latches is the recomputed one where the mains hardly moves meanwhile', () => {
    const slow = shortestPulse(0.06) * 1e6;
    deviations.relative('latching delay, constant mains (relative)', 'R-L', slow, c.delayWithResistance_us, PRINTED);
    expect(slow).toBeGreaterThan(c.delayWithoutResistance_us);
  });

  test('and the closed form of the rising sine at the stated frequency', () => {
    const omega = 2 * Math.PI * c.frequency_Hz;
    const reactance = omega * c.inductance_mH * 1e-3;
    const crest = (Math.SQRT2 * c.voltage_V) / Math.hypot(c.resistance_Ohm, reactance);
    const from = (c.firingAngle_deg / 180) * Math.PI - Math.atan(reactance / c.resistance_Ohm);
    const current = (t: number): number =>
      crest * (Math.sin(omega * t + from) - Math.sin(from) * Math.exp((-t * c.resistance_Ohm) / (c.inductance_mH * 1e-3)));
    let [low, high] = [0, 1e-3];
    for (let k = 0; k < 60; k++) {
      const middle = (low + high) / 2;
      if (current(middle) < c.latchingCurrent_A) low = middle;
      else high = middle;
    }
    deviations.relative('latching delay on the sine (relative)', 'R-L', shortestPulse(c.frequency_Hz), low, 1e-5);
  });
});

describe(data.printedShares.source, () => {
  test.each(data.printedShares.cases)('$conduction_deg degrees of conduction give $printedPower_pct % of the power', (c) => {
    const mains = stiff(230, 50);
    const dimmer = idealDimmer({ drive: firedAt(180 - c.conduction_deg) });
    const { power } = figures(pairing(mains, dimmer, resistor(100)));
    const share = (100 * power) / (peakOf(mains) ** 2 / 2 / (100 + IN_PATH));
    expect(Math.round(share)).toBe(c.printedPower_pct);
    deviations.absolute('share of the power (%)', `${c.conduction_deg} degrees`, share, c.power_pct, 5e-3);
  });
});
