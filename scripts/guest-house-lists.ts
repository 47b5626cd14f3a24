/**
 * The lamps and dimmers of an invented guest house that is being refitted, made from ranges: for measuring screenings. The same number
 * always gives the same entry; neighbours differ in everything.
 */
import type { AskedDimmer, AskedLamp } from '../server/schemas/pairing.ts';

/** A value of a range for the n-th entry: multiples of an irrational step spread evenly (Weyl), each dimension with its own. */
function spread(index: number, dimension: number): number {
  const step = Math.sqrt([2, 3, 5, 7, 11, 13, 17, 19, 23][dimension] ?? 29) % 1;
  return ((index + 1) * step) % 1;
}

function between(index: number, dimension: number, from: number, to: number): number {
  return Number((from + (to - from) * spread(index, dimension)).toPrecision(3));
}

/** As a house has them: half with a table of current over voltage, a third plain reservoir drivers, the rest filament lamps. */
export function guestHouseLamp(index: number): AskedLamp {
  const kind = spread(index, 0);
  if (kind < 0.17) return { ratedPower_W: between(index, 1, 15, 60), load: { kind: 'resistive' } };
  const ratedPower_W = between(index, 1, 3, 12);
  const input = { seriesResistance_Ohm: between(index, 2, 4.7, 68), capacitance_nF: between(index, 3, 4.7, 150) };
  if (kind < 0.5) {
    const capacitance_uF = between(index, 4, 2.2, 10);
    return { ratedPower_W, input, load: { kind: 'reservoir', capacitance_uF, power_W: Number((0.9 * ratedPower_W).toPrecision(3)) } };
  }
  const peak = Number(((ratedPower_W / 230) * between(index, 5, 1.5, 2.5) * 1000).toPrecision(3));
  const knee = between(index, 6, 20, 200);
  return {
    ratedPower_W,
    input,
    load: {
      kind: 'iv-table',
      points: [
        { voltage_V: 0, current_mA: 0 },
        { voltage_V: knee, current_mA: 0 },
        { voltage_V: 325, current_mA: peak },
      ],
    },
  };
}

/** Three in four with a diac, old and new, the rest with timed firing. */
export function guestHouseDimmer(index: number): AskedDimmer {
  const holdingCurrent_mA = between(index, 0, 10, 50);
  const latchingCurrent_mA = Number((holdingCurrent_mA * between(index, 1, 1.2, 2)).toPrecision(3));
  const common = {
    latchingCurrent_mA,
    holdingCurrent_mA,
    choke: { inductance_mH: between(index, 2, 0.5, 3) },
    interferenceCapacitance_nF: between(index, 3, 47, 150),
  };
  if (spread(index, 4) < 0.25) return { ...common, drive: { kind: 'timed', pulses: spread(index, 5) < 0.5 ? 'single' : 'train' } };
  return {
    ...common,
    drive: { kind: 'diac', capacitance_nF: between(index, 6, 68, 120), potentiometer_kOhm: between(index, 7, 220, 500) },
  };
}
