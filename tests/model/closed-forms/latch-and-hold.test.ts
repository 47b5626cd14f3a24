/** Where in the half-cycle a triac can latch into a resistor, and where the resistor's current falls below what holds it. */
import { describe, expect, test } from 'vitest';
import { LINE_LEAKAGE } from '../../../model/tolerances.ts';
import { Deviations } from '../../support/model-deviations.ts';
import { both, firedAt, idealDimmer, pairing, resistor, SWITCH_RESISTANCE, stiff } from '../../support/model-pairings.ts';
import { runFromRest } from '../../support/model-run.ts';
import data from './latch-and-hold.cases.json' with { type: 'json' };

const deviations = new Deviations('latching and holding into a resistor (degrees)');
const PULSE = 1e-6;
const IN_PATH = 2e-3 + SWITCH_RESISTANCE;
/** the lamp that makes the whole path this resistance, the lamp line's leakage beside it included: 0.16 uA is 2e-4 degrees at 10 W */
const lampIn = (resistance: number): number => 1 / (1 / (resistance - IN_PATH) - 1 / LINE_LEAKAGE);

describe.each(data.cases)('$resistance_Ohm Ohm on $voltage_V V, $latchingCurrent_mA/$holdingCurrent_mA mA', (c) => {
  const mains = stiff(c.voltage_V, c.frequency_Hz);
  const pulseAngle = PULSE * c.frequency_Hz * 360;
  const firedInto = (angle: number, turnOffTime = 0) =>
    runFromRest(
      pairing(
        mains,
        idealDimmer({
          latchingCurrent: both(c.latchingCurrent_mA / 1000),
          holdingCurrent: both(c.holdingCurrent_mA / 1000),
          turnOffTime,
          drive: firedAt(angle, { gatePulse: PULSE }),
        }),
        resistor(lampIn(c.resistance_Ohm)),
      ),
      2,
    ).map((h) => h.record);

  /** angle at which the answer changes, to a millionth of a degree */
  function edge(from: number, to: number): number {
    const latchesAt = (angle: number): boolean => firedInto(angle)[0]?.failedLatches === 0;
    const below = latchesAt(from);
    let [low, high] = [from, to];
    while (high - low > 1e-6) {
      const middle = (low + high) / 2;
      if (latchesAt(middle) === below) low = middle;
      else high = middle;
    }
    return high;
  }

  test('latches just inside the window of angles, in both polarities, and not just outside', () => {
    // the pulse may still end inside the window though it began before it
    for (const angle of [c.latchesFrom_deg + 0.001, 90, c.latchesUpTo_deg - 0.001]) {
      expect(firedInto(angle).map((r) => r.failedLatches)).toEqual([0, 0]);
    }
    for (const angle of [c.latchesFrom_deg - pulseAngle - 0.001, c.latchesUpTo_deg + 0.001]) {
      const records = firedInto(angle);
      expect(records.map((r) => r.failedLatches)).toEqual([1, 1]);
      for (const r of records) expect(r.ends[0]).toBeCloseTo(angle + pulseAngle, 9);
    }
  });

  test('finds the edges of the window at their closed form', () => {
    deviations.absolute('earliest latch', `${c.resistance_Ohm} Ohm`, edge(0.001, 90) + pulseAngle, c.latchesFrom_deg, 1e-4);
    // a falling current that is within rounding (0.3 uA) of the latching current as the gate comes counts as below it
    deviations.absolute('latest latch', `${c.resistance_Ohm} Ohm`, edge(90, 179.9), c.latchesUpTo_deg, 1e-3);
  });

  test('drops out where the current falls to the holding current, and later by the turn-off time', () => {
    for (const turnOffTime of [0, 15e-6]) {
      for (const record of firedInto(90, turnOffTime)) {
        const expected = c.ends_deg + turnOffTime * c.frequency_Hz * 360;
        deviations.absolute('end of conduction', `${c.resistance_Ohm} Ohm`, record.ends[0] as number, expected, 1e-4);
      }
    }
  });
});
