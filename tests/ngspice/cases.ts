/** The comparison circuits, each with a sentence that says what is on it. Add, never drop: a miss is to be understood. */
import { dimmerCases } from './cases-dimmers.ts';
import { reservoirLampCases } from './cases-reservoir-lamps.ts';
import { staticLampCases } from './cases-static-lamps.ts';
import {
  america,
  american,
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
  reservoir,
  timed,
} from './circuits.ts';

/** one or five lamps of every load kind, every drive */
const firstCases: readonly Case[] = [
  {
    name: 'a 60 W filament lamp at 230 V, half dial',
    dial: 50,
    pairing: pairing(europe, dimmer(50, 30), [[1, filament(60, europe)]]),
  },
  {
    name: 'a 15 W filament lamp at 230 V low on the dial',
    dial: 20,
    pairing: pairing(europe, dimmer(50, 30), [[1, filament(15, europe)]]),
  },
  {
    name: 'five 40 W filament lamps at 120 V near full dial',
    dial: 90,
    pairing: pairing(america, american(40, 20), [[5, filament(40, america)]]),
  },
  {
    name: 'one 8 W lamp that draws like a resistor re-fires near full dial',
    dial: 90,
    pairing: pairing(europe, dimmer(50, 30), [[1, emulator(8, europe, 47e-9)]]),
  },
  {
    name: 'five 8 W lamps that draw like resistors behind 100 nF each',
    dial: 60,
    pairing: pairing(europe, dimmer(50, 30), [[5, emulator(8, europe, 100e-9)]]),
  },
  {
    name: 'one 8 W lamp that draws like a resistor on a 25/14 mA dimmer',
    dial: 80,
    pairing: pairing(europe, dimmer(25, 14), [[1, emulator(8, europe, 47e-9)]]),
  },
  {
    name: 'one linear string that lights above 200 V',
    dial: 60,
    pairing: pairing(europe, dimmer(50, 30), [[1, linearString(200, 35e-3, 47e-9)]]),
  },
  {
    name: 'five linear strings at 120 V behind 1 mH each',
    dial: 70,
    pairing: pairing(america, american(30, 15), [[5, linearString(90, 60e-3, 100e-9, { inductance: 1e-3, inductorLoss: 3000 })]]),
  },
  {
    name: 'one 8 W reservoir lamp at 230 V',
    dial: 60,
    pairing: pairing(europe, dimmer(50, 30), [[1, reservoir(8, 4.7e-6, 60, { capacitance: 22e-9 })]]),
  },
  {
    name: 'five 8 W reservoir lamps with an input choke each',
    dial: 60,
    // a longer step is 0.18 degrees late on the second firing of the second half-cycle
    tolerances: { maximumStep: 4e-7 },
    pairing: pairing(europe, dimmer(50, 30), [[5, reservoir(8, 4.7e-6, 60, { capacitance: 22e-9, inductance: 1e-3, inductorLoss: 5000 })]]),
  },
  {
    name: 'a timed single pulse into five lamps that draw like resistors',
    dial: 50,
    pairing: pairing(europe, dimmer(35, 20, { drive: timed }), [[5, emulator(6, europe, 47e-9)]]),
  },
  {
    name: 'a timed drive that holds its gate into one constant-power lamp',
    dial: 40,
    pairing: pairing(europe, dimmer(50, 30, { drive: { ...timed, pulses: 'held' } }), [[1, converter(7, 80, 340, 47e-9)]]),
  },
  {
    name: 'two timing sections into three lamps that draw like resistors',
    dial: 50,
    pairing: pairing(
      europe,
      dimmer(40, 20, { drive: { ...diac, secondSection: { resistance: 15e3, capacitance: 47e-9 } }, choke: choke(1e-3) }),
      [[3, emulator(9, europe, 68e-9)]],
    ),
  },
  {
    name: 'a dimmer with a neutral and a passive bleeder in the lamp at 120 V',
    dial: 50,
    pairing: pairing(america, american(25, 14, { wiring: 'three-wire' }), [
      [2, converter(9, 60, 180, 100e-9, { bleeder: { kind: 'resistor-capacitor', resistance: 390, capacitance: 220e-9 } })],
    ]),
  },
];

export const cases: readonly Case[] = [...firstCases, ...staticLampCases, ...reservoirLampCases, ...dimmerCases];
