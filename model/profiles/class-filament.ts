/** Filament and halogen lamps straight on the mains: the hot resistance follows from the rating. */
import { type ClassRange, inputWith } from './class-circuit.ts';

export const FILAMENT: ClassRange = {
  spans:
    'The hot filament alone. A dimmed filament is cooler and draws more current at the same voltage, which only helps the dimmer hold: the hot one is the ' +
    'cautious end, and the only one at the rated power.',
  ask: 'nothing: the rating decides the circuit',
  circuits: [
    {
      name: 'hot filament',
      basis: 'Rated voltage squared over rated power (exact for the hot lamp), leads of 0.1 Ohm.',
      places: [0],
      lamp: (rating, _place, scale) => ({
        ratedPower: rating.power,
        input: inputWith({ seriesResistance: 0.1 }),
        load: { kind: 'resistive', resistance: rating.voltage ** 2 / (rating.power * scale) },
      }),
    },
  ],
};
