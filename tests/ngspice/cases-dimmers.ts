/** Dimmers away from the everyday one: a neutral, timed drives, unequal polarities, two sections, no turn-off time, no on-voltage. */
import type { DiacDrive, TimedDrive } from '../../model/pairing.ts';
import {
  america,
  american,
  both,
  type Case,
  choke,
  converter,
  diac,
  dimmer,
  emulator,
  europe,
  filament,
  linearString,
  pairing,
  timed,
} from './circuits.ts';

const neutral = { wiring: 'three-wire' } as const;
const diacWith = (change: Partial<DiacDrive>) => ({ drive: { ...diac, ...change } });
const timedWith = (change: Partial<TimedDrive>) => ({ drive: { ...timed, ...change } });
const twoSections = diacWith({ secondSection: { resistance: 15e3, capacitance: 47e-9 } });

export const dimmerCases: readonly Case[] = [
  { name: 'a neutral and a 40 W filament lamp', dial: 60, pairing: pairing(europe, dimmer(50, 30, neutral), [[1, filament(40, europe)]]) },
  {
    name: 'a neutral and one 8 W resistor-like lamp near full dial',
    dial: 85,
    pairing: pairing(europe, dimmer(50, 30, neutral), [[1, emulator(8, europe, 47e-9)]]),
  },
  {
    name: 'a neutral and five linear strings',
    dial: 40,
    pairing: pairing(europe, dimmer(35, 20, neutral), [[5, linearString(180, 35e-3, 47e-9)]]),
  },
  {
    name: 'a neutral, two timing sections and three resistor-like lamps',
    dial: 60,
    pairing: pairing(europe, dimmer(40, 20, { ...neutral, ...twoSections }), [[3, emulator(8, europe, 68e-9)]]),
  },
  {
    name: 'a neutral and a held gate into two constant-power lamps',
    dial: 50,
    pairing: pairing(europe, dimmer(50, 30, { ...neutral, ...timedWith({ pulses: 'held' }) }), [[2, converter(8, 90, 340, 47e-9)]]),
  },
  {
    name: 'a diac that breaks over at 30 and 34 V',
    dial: 50,
    pairing: pairing(europe, dimmer(50, 30, diacWith({ breakover: { positive: 30, negative: 34 } })), [[1, filament(60, europe)]]),
  },
  {
    name: 'a diac that breaks over at 33 and 31 V into two resistor-like lamps',
    dial: 40,
    pairing: pairing(europe, dimmer(35, 20, diacWith({ breakover: { positive: 33, negative: 31 } })), [[2, emulator(9, europe, 68e-9)]]),
  },
  {
    name: 'a triac that holds worse in one polarity under one resistor-like lamp',
    dial: 80,
    pairing: pairing(
      europe,
      dimmer(40, 25, { latchingCurrent: { positive: 40e-3, negative: 60e-3 }, holdingCurrent: { positive: 20e-3, negative: 35e-3 } }),
      [[1, emulator(9, europe, 47e-9)]],
    ),
  },
  {
    name: 'no turn-off time and a filament lamp',
    dial: 60,
    pairing: pairing(europe, dimmer(50, 30, { turnOffTime: 0 }), [[1, filament(40, europe)]]),
  },
  {
    name: 'no turn-off time and two resistor-like lamps behind 100 nF',
    dial: 70,
    // where nothing has to last, a longer step notices the current 0.1 degrees late within eight half-cycles
    tolerances: { maximumStep: 4e-7 },
    pairing: pairing(europe, dimmer(50, 30, { turnOffTime: 0 }), [[2, emulator(8, europe, 100e-9)]]),
  },
  {
    name: 'a turn-off time of 40 us and a 3 mH choke',
    dial: 70,
    pairing: pairing(europe, dimmer(50, 30, { turnOffTime: 40e-6, choke: choke(3e-3) }), [[2, emulator(8, europe, 100e-9)]]),
  },
  {
    name: 'a triac without an on-voltage',
    dial: 50,
    pairing: pairing(europe, dimmer(50, 30, { onVoltage: 0, onResistance: 0.1 }), [[2, filament(25, europe)]]),
  },
  {
    name: 'a dimmer without a choke',
    dial: 60,
    pairing: pairing(europe, dimmer(40, 25, { choke: { inductance: 0, resistance: 0.3, lossResistance: null } }), [
      [2, emulator(8, europe, 47e-9)],
    ]),
  },
  {
    name: 'a choke without core loss beside a snubber',
    dial: 70,
    pairing: pairing(europe, dimmer(40, 25, { choke: { inductance: 0.3e-3, resistance: 0.3, lossResistance: null } }), [
      [3, emulator(8, europe, 47e-9)],
    ]),
  },
  {
    name: 'a snubber of 470 Ohm and 100 nF',
    dial: 50,
    pairing: pairing(europe, dimmer(40, 25, { snubber: { resistance: 470, capacitance: 100e-9 } }), [[1, emulator(8, europe, 47e-9)]]),
  },
  {
    name: 'a snubber of 47 Ohm and 150 nF with a 1 mH choke',
    dial: 85,
    pairing: pairing(europe, dimmer(40, 25, { snubber: { resistance: 47, capacitance: 150e-9 }, choke: choke(1e-3) }), [
      [2, emulator(8, europe, 47e-9)],
    ]),
  },
  {
    name: 'an interference capacitor and five resistor-like lamps',
    dial: 50,
    pairing: pairing(europe, dimmer(50, 30, { interferenceCapacitance: 100e-9, choke: choke(1e-3) }), [[5, emulator(6, europe, 47e-9)]]),
  },
  {
    name: 'an interference capacitor, no snubber and a linear string',
    dial: 70,
    pairing: pairing(america, american(35, 20, { snubber: null, interferenceCapacitance: 47e-9 }), [[2, linearString(90, 60e-3, 100e-9)]]),
  },
  {
    name: 'a diac that drops little and a small timing capacitor',
    dial: 50,
    pairing: pairing(
      europe,
      dimmer(40, 25, diacWith({ capacitance: 47e-9, potentiometer: 680e3, residualVoltage: 24, gateResistance: 22 })),
      [[1, filament(40, europe)]],
    ),
  },
  {
    name: 'two timing sections at 120 V and two resistor-like lamps',
    dial: 70,
    pairing: pairing(
      america,
      american(35, 20, {
        drive: { ...diac, fixedResistance: 3.3e3, potentiometer: 100e3, secondSection: { resistance: 10e3, capacitance: 68e-9 } },
      }),
      [[2, emulator(10, america, 100e-9)]],
    ),
  },
  {
    name: 'two timing sections and one linear string',
    dial: 80,
    pairing: pairing(europe, dimmer(50, 30, twoSections), [[1, linearString(200, 35e-3, 47e-9)]]),
  },
  {
    name: 'a timed single pulse into one linear string that is not lit yet',
    dial: 100,
    pairing: pairing(europe, dimmer(50, 30, timedWith({ firingAngleFull: 20 })), [[1, linearString(200, 35e-3, 47e-9)]]),
  },
  {
    name: 'a train of pulses into one resistor-like lamp',
    dial: 70,
    pairing: pairing(europe, dimmer(50, 30, timedWith({ pulses: 'train' })), [[1, emulator(8, europe, 47e-9)]]),
  },
  {
    name: 'a train of pulses into one constant-power lamp at 120 V',
    dial: 80,
    pairing: pairing(america, dimmer(40, 25, timedWith({ pulses: 'train', pulseSpacing: 800e-6 })), [[1, converter(9, 60, 180, 100e-9)]]),
  },
  {
    name: 'a held gate into five linear strings at 120 V',
    dial: 80,
    pairing: pairing(america, dimmer(50, 30, timedWith({ pulses: 'held' })), [[5, linearString(90, 60e-3, 68e-9)]]),
  },
  {
    name: 'a timed single pulse low on the dial into a filament lamp',
    dial: 5,
    pairing: pairing(america, dimmer(35, 20, timedWith({ gatePulse: 30e-6 })), [[1, filament(60, america)]]),
  },
  {
    name: 'a short timed pulse that cannot latch a 7 W filament lamp',
    dial: 10,
    pairing: pairing(europe, dimmer(50, 30, timedWith({ gatePulse: 50e-6, firingAngleLow: 150 })), [[1, filament(7, europe)]]),
  },
  {
    name: 'a triac with unequal currents under a timed single pulse',
    dial: 60,
    pairing: pairing(
      europe,
      dimmer(40, 25, {
        ...timedWith({}),
        latchingCurrent: { positive: 25e-3, negative: 40e-3 },
        holdingCurrent: { positive: 12e-3, negative: 25e-3 },
      }),
      [[2, emulator(8, europe, 33e-9)]],
    ),
  },
  {
    name: 'both polarities alike on an 8/5 mA dimmer with a 0.05 mH choke',
    dial: 60,
    pairing: pairing(europe, dimmer(8, 5, { holdingCurrent: both(5e-3), choke: choke(5e-5) }), [[1, emulator(4, europe, 10e-9)]]),
  },
  {
    name: 'a heater wired without any series resistance at full dial',
    dial: 100,
    pairing: pairing(europe, dimmer(50, 30), [[1, filament(100, europe, { seriesResistance: 0 })]]),
  },
  {
    name: 'a weak supply, an 8 mA diac and a filament lamp at the bottom of the dial',
    dial: 10,
    pairing: pairing({ ...europe, sourceResistance: 5 }, dimmer(35, 20, diacWith({ diacHoldingCurrent: 8e-3 })), [
      [2, filament(60, europe)],
    ]),
  },
  {
    name: 'a diac that the timing resistor keeps conducting beside a triac that cannot latch',
    dial: 98,
    pairing: pairing(europe, dimmer(70, 50, diacWith({ diacHoldingCurrent: 1e-3 })), [[1, filament(5, europe)]]),
  },
  {
    name: 'three kinds of lamp on one dimmer at 120 V',
    dial: 65,
    pairing: pairing(america, american(35, 20), [
      [1, emulator(8, america, 100e-9)],
      [2, linearString(90, 50e-3, 68e-9)],
      [1, converter(9, 60, 180, 100e-9)],
    ]),
  },
];
