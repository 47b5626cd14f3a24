/** Lamps without a store of their own behind the bridge: filament, resistor-like, linear, constant-power, recorded tables; bleeders. */
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
  lamp,
  linearString,
  pairing,
  table,
} from './circuits.ts';

const bare = { snubber: null };

export const staticLampCases: readonly Case[] = [
  { name: 'a 25 W filament lamp on a 70/50 mA dimmer', dial: 70, pairing: pairing(europe, dimmer(70, 50), [[1, filament(25, europe)]]) },
  {
    name: 'five 60 W filament lamps with a 3 mH choke',
    dial: 40,
    pairing: pairing(europe, dimmer(50, 30, { choke: choke(3e-3) }), [[5, filament(60, europe)]]),
  },
  { name: 'a 60 W filament lamp without a snubber', dial: 80, pairing: pairing(europe, dimmer(35, 20, bare), [[1, filament(60, europe)]]) },
  {
    name: 'a 40 W filament lamp at 120 V low on the dial',
    dial: 20,
    pairing: pairing(america, american(30, 15), [[1, filament(40, america)]]),
  },
  {
    name: 'a 10 W heater beside an interference capacitor',
    dial: 60,
    pairing: pairing(europe, dimmer(25, 14, { interferenceCapacitance: 68e-9 }), [[1, filament(10, europe)]]),
  },
  {
    name: 'a 7 W filament lamp under a dimmer that latches at 70 mA',
    dial: 95,
    pairing: pairing(europe, dimmer(70, 50), [[1, filament(7, europe)]]),
  },
  {
    name: 'two 8 W resistor-like lamps at three quarters of the dial',
    dial: 75,
    pairing: pairing(europe, dimmer(50, 30), [[2, emulator(8, europe, 100e-9)]]),
  },
  {
    name: 'one 8 W resistor-like lamp with no input capacitor',
    dial: 60,
    pairing: pairing(europe, dimmer(35, 20), [[1, emulator(8, europe, 0)]]),
  },
  {
    name: 'one 8 W resistor-like lamp behind 220 nF',
    dial: 60,
    pairing: pairing(europe, dimmer(50, 30), [[1, emulator(8, europe, 220e-9)]]),
  },
  {
    name: 'one 8 W resistor-like lamp behind 220 nF and a 3 mH dimmer choke',
    dial: 60,
    pairing: pairing(europe, dimmer(25, 14, { choke: choke(3e-3) }), [[1, emulator(8, europe, 220e-9)]]),
  },
  {
    name: 'five 5 W resistor-like lamps on an 8/5 mA dimmer',
    dial: 30,
    pairing: pairing(europe, dimmer(8, 5), [[5, emulator(5, europe, 47e-9)]]),
  },
  {
    name: 'one 5 W resistor-like lamp on an 8/5 mA dimmer without a snubber',
    dial: 50,
    pairing: pairing(europe, dimmer(8, 5, bare), [[1, emulator(5, europe, 22e-9)]]),
  },
  {
    name: 'one 10 W resistor-like lamp at 120 V',
    dial: 85,
    pairing: pairing(america, american(50, 30), [[1, emulator(10, america, 100e-9)]]),
  },
  {
    name: 'five 10 W resistor-like lamps at 120 V with an input choke each',
    dial: 40,
    pairing: pairing(america, american(35, 20), [[5, emulator(10, america, 100e-9, { inductance: 2.2e-3, inductorLoss: 4000 })]]),
  },
  {
    name: 'one 12 W resistor-like lamp with a damper',
    dial: 80,
    pairing: pairing(europe, dimmer(50, 30), [[1, emulator(12, europe, 47e-9, { damper: { resistance: 330, capacitance: 150e-9 } })]]),
  },
  {
    name: 'five 12 W resistor-like lamps with dampers and a 0.05 mH choke',
    dial: 95,
    pairing: pairing(europe, dimmer(40, 25, { choke: choke(5e-5) }), [
      [5, emulator(12, europe, 47e-9, { damper: { resistance: 470, capacitance: 100e-9 } })],
    ]),
  },
  {
    name: 'one linear string above 140 V on a 25/14 mA dimmer',
    dial: 70,
    pairing: pairing(europe, dimmer(25, 14), [[1, linearString(140, 40e-3, 22e-9)]]),
  },
  {
    name: 'five linear strings above 200 V at full dial',
    dial: 100,
    pairing: pairing(europe, dimmer(50, 30), [[5, linearString(200, 35e-3, 47e-9)]]),
  },
  {
    name: 'one linear string above 200 V with a passive bleeder',
    dial: 50,
    pairing: pairing(europe, dimmer(35, 20), [[1, linearString(200, 35e-3, 47e-9, { bleeder: { kind: 'resistor', resistance: 10e3 } })]]),
  },
  {
    name: 'one linear string above 200 V with an active bleeder',
    dial: 60,
    pairing: pairing(europe, dimmer(50, 30), [
      [1, linearString(200, 45e-3, 22e-9, { bleeder: { kind: 'active', current: 40e-3, below: 205 } })],
    ]),
  },
  {
    name: 'one linear string above 90 V at 120 V without a snubber',
    dial: 50,
    pairing: pairing(america, american(35, 20, bare), [[1, linearString(90, 80e-3, 47e-9)]]),
  },
  {
    name: 'five linear strings above 100 V at 120 V low on the dial',
    dial: 20,
    pairing: pairing(america, american(25, 14), [[5, linearString(100, 50e-3, 68e-9)]]),
  },
  {
    name: 'one constant-power lamp without a bleeder',
    dial: 60,
    pairing: pairing(europe, dimmer(25, 14), [[1, converter(8, 90, 340, 47e-9)]]),
  },
  { name: 'five constant-power lamps at 230 V', dial: 80, pairing: pairing(europe, dimmer(50, 30), [[5, converter(8, 90, 340, 47e-9)]]) },
  {
    name: 'one constant-power lamp with an R-C bleeder',
    dial: 50,
    pairing: pairing(europe, dimmer(50, 30), [
      [1, converter(8, 90, 340, 47e-9, { bleeder: { kind: 'resistor-capacitor', resistance: 470, capacitance: 220e-9 } })],
    ]),
  },
  {
    name: 'two constant-power lamps with active bleeders',
    dial: 60,
    pairing: pairing(europe, dimmer(40, 25), [
      [2, converter(9, 90, 340, 22e-9, { bleeder: { kind: 'active', current: 30e-3, below: 100 } })],
    ]),
  },
  {
    name: 'five constant-power lamps at 120 V behind 0.47 mH each',
    dial: 60,
    pairing: pairing(america, american(30, 15), [[5, converter(9, 50, 180, 150e-9, { inductance: 0.47e-3, inductorLoss: 2000 })]]),
  },
  {
    name: 'a recorded table that draws current from no voltage on',
    dial: 50,
    pairing: pairing(europe, dimmer(35, 20), [
      [
        3,
        table(
          [
            [0, 0.02],
            [60, 0.02],
            [61, 0.035],
            [200, 0.045],
            [340, 0.05],
          ],
          { capacitance: 33e-9 },
        ),
      ],
    ]),
  },
  {
    name: 'a recorded table whose current falls towards the crest',
    dial: 90,
    pairing: pairing(europe, dimmer(30, 18), [
      [
        2,
        table(
          [
            [10, 0.01],
            [40, 0.09],
            [120, 0.07],
            [230, 0.05],
            [325, 0.04],
          ],
          { capacitance: 22e-9 },
        ),
      ],
    ]),
  },
  {
    name: 'a resistive lamp with an active bleeder and a series choke',
    dial: 60,
    pairing: pairing(europe, dimmer(50, 30), [
      [
        1,
        lamp(
          { kind: 'resistive', resistance: 6600 },
          {
            seriesResistance: 10,
            inductance: 1e-3,
            inductorLoss: 3000,
            capacitance: 22e-9,
            bleeder: { kind: 'active', current: 40e-3, below: 400 },
          },
        ),
      ],
    ]),
  },
  {
    name: 'one resistor-like lamp with an 18 kOhm added load',
    dial: 50,
    pairing: pairing(europe, dimmer(35, 20), [[1, emulator(6, europe, 47e-9)]], { kind: 'resistor', resistance: 18e3 }),
  },
  {
    name: 'one linear string with an R-C bypass across the lamps',
    dial: 60,
    pairing: pairing(europe, dimmer(50, 30), [[1, linearString(180, 40e-3, 22e-9)]], {
      kind: 'resistor-capacitor',
      resistance: 220,
      capacitance: 220e-9,
    }),
  },
  {
    name: 'a filament lamp beside three resistor-like lamps',
    dial: 70,
    pairing: pairing(europe, dimmer(50, 30), [
      [1, filament(25, europe)],
      [3, emulator(7, europe, 68e-9)],
    ]),
  },
  {
    name: 'a filament lamp at 120 V beside two linear strings, two timing sections',
    dial: 60,
    pairing: pairing(
      america,
      american(50, 30, {
        drive: { ...diac, fixedResistance: 3.3e3, potentiometer: 150e3, secondSection: { resistance: 22e3, capacitance: 22e-9 } },
      }),
      [
        [1, filament(25, america)],
        [2, linearString(90, 50e-3, 68e-9)],
      ],
    ),
  },
];
