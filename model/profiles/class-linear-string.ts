/** Linear-regulated strings: a bridge, LED strings that light above a knee, and a linear current regulator. */
import type { IvPoint, LampInput } from '../pairing.ts';
import { between, bySupply, type ClassCircuit, type ClassRange, inputWith, type Rating } from './class-circuit.ts';

/** share of a knee over which its string's current rises, from memory: the spread of forward voltage from a tenth to full current */
const RISE = 0.05;

/** one stage lights above its knee (share of the mains peak) and draws its share of the top current */
function stages(rating: Rating, steps: readonly (readonly [number, number])[], scale: number): IvPoint[] {
  const peak = rating.voltage * Math.SQRT2;
  const top = ((Math.SQRT2 * rating.power) / rating.voltage) * scale;
  const points: IvPoint[] = [{ voltage: 0, current: 0 }];
  let level = 0;
  for (const [knee, share] of steps) {
    points.push({ voltage: knee * peak, current: level * top }, { voltage: knee * (1 + RISE) * peak, current: share * top });
    level = share;
  }
  return [...points, { voltage: 1.2 * peak, current: level * top }];
}

function circuit(
  name: string,
  basis: string,
  places: readonly number[],
  steps: (place: number) => readonly (readonly [number, number])[],
  input: (rating: Rating) => Partial<LampInput>,
): ClassCircuit {
  return {
    name,
    basis,
    places,
    lamp: (rating, place, scale) => ({
      ratedPower: rating.power,
      input: inputWith(input(rating)),
      load: { kind: 'iv-table', points: stages(rating, steps(place), scale) },
    }),
  };
}

const single = (place: number) => [[between(0.5, 0.85, place), 1]] as const;

export const LINEAR_STRING: ClassRange = {
  spans:
    'One string with its knee at 50 to 85 % of the mains peak, and tapped strings of three stages that begin at 25 to 40 %, from memory. ' +
    'Left out: bleeders made for dimmers, reservoir capacitors behind the bridge (those are reservoir drivers).',
  ask: 'the string voltage (or the taps’ voltages), any capacitor at the input, or a record of the current on undimmed mains',
  circuits: [
    circuit(
      'one string, no capacitor',
      '10 Ohm and no film capacitor: these lamps have nothing that switches, so many have no filter, from memory. Knee from early to late: a late one lets go long before the zero crossing.',
      [0, 1],
      single,
      () => ({ seriesResistance: 10 }),
    ),
    circuit(
      'one string, film capacitor',
      '10 Ohm (4.7 Ohm below 180 V) and 47 nF (100 nF), a usual surge filter, from memory: its charge current at the firing rings and dies before the string carries on.',
      [1],
      single,
      (rating) => ({ seriesResistance: bySupply(rating, 10, 4.7), capacitance: bySupply(rating, 47e-9, 100e-9) }),
    ),
    circuit(
      'tapped string of three stages, no capacitor',
      'Stages from 25 or 40 % of the mains peak to 85 %, evenly, with currents in proportion to their knees, from memory: current over most of the half-cycle, least of it at the start.',
      [0, 1],
      (place) => {
        const first = between(0.25, 0.4, place);
        return [0, 0.5, 1].map((along) => between(first, 0.85, along)).map((knee) => [knee, knee / 0.85] as const);
      },
      () => ({ seriesResistance: 10 }),
    ),
  ],
};
