/** Plain non-dimmable drivers: bridge, reservoir capacitor, converter at constant power. */
import type { LampInput } from '../pairing.ts';
import { betweenRatios, bySupply, type ClassCircuit, type ClassRange, inputWith, LARGE_CHOKE, type Rating } from './class-circuit.ts';

function circuit(name: string, basis: string, places: readonly number[], input: (rating: Rating) => Partial<LampInput>): ClassCircuit {
  return {
    name,
    basis,
    places,
    lamp: (rating, place, scale) => ({
      ratedPower: rating.power,
      input: inputWith(input(rating)),
      load: {
        kind: 'reservoir',
        capacitance: rating.power * betweenRatios(bySupply(rating, 0.3e-6, 1e-6), bySupply(rating, 1e-6, 2e-6), place),
        // the input's series resistor is the surge limiter of these lamps
        surgeResistance: 1,
        drain: { kind: 'power', power: rating.power * scale },
        minimumVoltage: bySupply(rating, 50, 25),
      },
    }),
  };
}

const SIZE =
  'Reservoir 0.3 to 1 uF a watt (1 to 2 uF a watt below 180 V), from memory: a small one draws the longest arc, a large one the shortest and steepest.';

export const RESERVOIR_DRIVER: ClassRange = {
  spans: `${SIZE} Input from well damped to ringing. Left out: valley-fill circuits, start-up delays.`,
  ask: 'the input capacitor and reservoir capacitor, the series resistor and inductor before them, or a record of the current on undimmed mains',
  circuits: [
    circuit(
      'high series resistor, small film capacitor, no inductor',
      '47 Ohm (22 Ohm below 180 V) and 22 nF (47 nF), the ends of their usual ranges, from memory: the gentlest inrush and the least ringing.',
      [0, 1],
      (rating) => ({ seriesResistance: bySupply(rating, 47, 22), capacitance: bySupply(rating, 22e-9, 47e-9) }),
    ),
    circuit(
      'low series resistor, large film capacitor, no inductor',
      '10 Ohm (4.7 Ohm below 180 V) and 150 nF (330 nF), the ends of their usual ranges, from memory: the hardest inrush, which rings with the dimmer’s choke.',
      [1],
      (rating) => ({ seriesResistance: bySupply(rating, 10, 4.7), capacitance: bySupply(rating, 150e-9, 330e-9) }),
    ),
    circuit(
      'low series resistor, large film capacitor, large inductor',
      '10 Ohm (4.7 Ohm below 180 V), 4.7 mH and 150 nF (330 nF), the ends of their usual ranges, from memory: the slowest and longest ring.',
      [0, 1],
      (rating) => ({ seriesResistance: bySupply(rating, 10, 4.7), capacitance: bySupply(rating, 150e-9, 330e-9), ...LARGE_CHOKE }),
    ),
  ],
};
