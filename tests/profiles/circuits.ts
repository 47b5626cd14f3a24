/** The known circuits whose undimmed current ngspice recorded, to be got back by fitting. Generic values, from memory. */
import type { Lamp } from '../../model/pairing.ts';
import type { Sine } from '../../model/profiles/undimmed-lamp.ts';
import { america, emulator, europe, linearString, reservoir, table } from '../ngspice/circuits.ts';

export interface KnownCircuit {
  readonly name: string;
  readonly sine: Sine;
  readonly lamp: Lamp;
}

const at230: Sine = { voltage: europe.voltage, frequency: europe.frequency };
const at120: Sine = { voltage: america.voltage, frequency: america.frequency };

export const staticCircuits: readonly KnownCircuit[] = [
  { name: 'an 8 W emulated resistor with 47 nF at 230 V', sine: at230, lamp: emulator(8, europe, 47e-9) },
  { name: 'a 6 W emulated resistor with 220 nF at 120 V', sine: at120, lamp: emulator(6, america, 220e-9, { seriesResistance: 10 }) },
  { name: 'a linear string that lights at 200 V with 47 nF', sine: at230, lamp: linearString(200, 0.03, 47e-9) },
  {
    name: 'a curve that rises, rests and falls, with 100 nF',
    sine: at230,
    lamp: table(
      [
        [0, 0],
        [60, 0.012],
        [180, 0.04],
        [250, 0.042],
        [320, 0.033],
      ],
      { capacitance: 100e-9 },
    ),
  },
];

export const dropperCircuits: readonly KnownCircuit[] = [
  {
    name: 'a series capacitor of 1 uF before a string of 80 V at 230 V',
    sine: at230,
    lamp: table(
      [
        [0, 0],
        [76, 0],
        [84, 0.1],
      ],
      { seriesResistance: 100, seriesCapacitance: 1e-6 },
    ),
  },
];

export const reservoirCircuits: readonly KnownCircuit[] = [
  { name: 'an 8 W reservoir lamp of 4.7 uF at 230 V', sine: at230, lamp: reservoir(8, 4.7e-6, 50, { capacitance: 22e-9 }) },
  {
    name: 'a 5 W reservoir lamp of 2.2 uF behind 47 Ohm at 230 V',
    sine: at230,
    lamp: reservoir(5, 2.2e-6, 50, { capacitance: 47e-9, seriesResistance: 47 }, 2),
  },
  {
    name: 'a 9 W reservoir lamp of 15 uF at 120 V',
    sine: at120,
    lamp: reservoir(9, 15e-6, 25, { capacitance: 100e-9, seriesResistance: 6.8 }, 1),
  },
];
