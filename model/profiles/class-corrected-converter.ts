/** Power-factor-corrected converters: current that follows the voltage above a dead zone around the zero crossing. */
import type { LampInput } from '../pairing.ts';
import { between, bySupply, type ClassCircuit, type ClassRange, inputWith, LARGE_CHOKE, type Rating } from './class-circuit.ts';

function circuit(name: string, basis: string, places: readonly number[], input: (rating: Rating) => Partial<LampInput>): ClassCircuit {
  return {
    name,
    basis,
    places,
    lamp: (rating, place, scale) => {
      const peak = rating.voltage * Math.SQRT2;
      const dead = peak * between(0.03, 0.35, place);
      return {
        ratedPower: rating.power,
        input: inputWith(input(rating)),
        load: {
          kind: 'iv-table',
          points: [
            { voltage: 0, current: 0 },
            { voltage: dead, current: 0 },
            { voltage: peak, current: ((Math.SQRT2 * rating.power) / rating.voltage) * scale },
          ],
        },
      };
    },
  };
}

export const CORRECTED_CONVERTER: ClassRange = {
  spans:
    'Dead zone around the zero crossing from 3 % of the mains peak (a converter that can step up emulates a resistor) to 35 % (one that ' +
    'only steps down cannot draw current below its output voltage), from memory; above it a straight line. Left out: control that answers within ' +
    'a half-cycle, bleeders made for dimmers.',
  ask: 'the voltage from which the converter draws current, the film capacitor and inductor at its input, or a record of the current on undimmed mains',
  circuits: [
    circuit(
      'high series resistor, small film capacitor, no inductor',
      '47 Ohm (22 Ohm below 180 V) and 22 nF (47 nF), the ends of their usual ranges, from memory: the least ringing.',
      [0, 1],
      (rating) => ({ seriesResistance: bySupply(rating, 47, 22), capacitance: bySupply(rating, 22e-9, 47e-9) }),
    ),
    circuit(
      'middle series resistor, middle film capacitor, no inductor',
      '22 Ohm (10 Ohm below 180 V) and 68 nF (150 nF), from memory: between the other two, looked at where a power factor says that the lamp is neither.',
      [],
      (rating) => ({ seriesResistance: bySupply(rating, 22, 10), capacitance: bySupply(rating, 68e-9, 150e-9) }),
    ),
    circuit(
      'low series resistor, large film capacitor, large inductor',
      '10 Ohm (4.7 Ohm below 180 V), 4.7 mH and 150 nF (330 nF), the ends of their usual ranges, from memory: the slowest and longest ring.',
      [0, 1],
      (rating) => ({ seriesResistance: bySupply(rating, 10, 4.7), capacitance: bySupply(rating, 150e-9, 330e-9), ...LARGE_CHOKE }),
    ),
  ],
};
