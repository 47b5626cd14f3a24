/** Series-capacitor droppers: a film capacitor before the bridge takes up what the string of LEDs does not. */
import { between, type ClassCircuit, type ClassRange, inputWith } from './class-circuit.ts';

/** share of the string's voltage over which its current rises, from memory */
const RISE = 0.05;

function circuit(name: string, basis: string, places: readonly number[], seriesResistance: number): ClassCircuit {
  return {
    name,
    basis,
    places,
    lamp: (rating, place, scale) => {
      const peak = rating.voltage * Math.SQRT2;
      const string = peak * between(0.1, 0.45, place);
      // the capacitor moves 2 C (Vp - Vs) of charge through the string in each half-cycle: P = 4 f C Vs (Vp - Vs)
      const capacitance = (scale * rating.power) / (4 * rating.frequency * string * (peak - string));
      const crest = 2 * Math.PI * rating.frequency * capacitance * peak;
      return {
        ratedPower: rating.power,
        input: inputWith({ seriesResistance, seriesCapacitance: capacitance }),
        load: {
          kind: 'iv-table',
          points: [
            { voltage: 0, current: 0 },
            { voltage: string * (1 - RISE), current: 0 },
            { voltage: string * (1 + RISE), current: crest },
          ],
        },
      };
    },
  };
}

export const SERIES_CAPACITOR_DROPPER: ClassRange = {
  spans:
    'String voltage from 10 to 45 % of the mains peak, series resistor from 22 to 220 Ohm, 1 MOhm across the capacitor, from memory. The smoothing ' +
    'capacitor behind the bridge is taken as holding the string voltage. Left out: inductors, regulators behind the bridge.',
  ask: 'the series capacitor, the series resistor and the string voltage, or the power factor',
  circuits: [
    circuit('small series resistor', '22 Ohm, the low end of the usual range, from memory: the hardest inrush at the firing.', [0, 1], 22),
    circuit('large series resistor', '220 Ohm, the high end of the usual range, from memory: the softest inrush.', [0, 1], 220),
  ],
};
