/** Lamps with a reservoir capacitor: short charging pulses, nothing between them, so the dimmer's own branches decide. */
import {
  america,
  american,
  type Case,
  choke,
  diac,
  dimmer,
  emulator,
  europe,
  filament,
  lamp,
  pairing,
  reservoir,
  timed,
} from './circuits.ts';

const small = (power: number, input = {}) => reservoir(power, power * 0.5e-6, 60, { capacitance: 22e-9, ...input });
const smallAmerican = (power: number, input = {}) =>
  reservoir(power, power * 1.5e-6, 40, { capacitance: 47e-9, seriesResistance: 10, ...input }, 5);
const steadyCurrent = (current: number, capacitance: number, minimumVoltage: number, input = {}) =>
  lamp(
    { kind: 'reservoir', capacitance, surgeResistance: 15, drain: { kind: 'current', current }, minimumVoltage },
    { capacitance: 22e-9, ...input },
  );

export const reservoirLampCases: readonly Case[] = [
  { name: 'one 5 W reservoir lamp at one third of the dial', dial: 35, pairing: pairing(europe, dimmer(50, 30), [[1, small(5)]]) },
  { name: 'one 5 W reservoir lamp at full dial', dial: 100, pairing: pairing(europe, dimmer(50, 30), [[1, small(5)]]) },
  { name: 'one 5 W reservoir lamp low on the dial', dial: 15, pairing: pairing(europe, dimmer(50, 30), [[1, small(5)]]) },
  { name: 'five 5 W reservoir lamps at three quarters of the dial', dial: 75, pairing: pairing(europe, dimmer(50, 30), [[5, small(5)]]) },
  { name: 'five 5 W reservoir lamps on an 8/5 mA dimmer', dial: 50, pairing: pairing(europe, dimmer(8, 5), [[5, small(5)]]) },
  { name: 'one 12 W reservoir lamp on an 8/5 mA dimmer', dial: 65, pairing: pairing(europe, dimmer(8, 5), [[1, small(12)]]) },
  {
    name: 'one 12 W reservoir lamp with a 3 mH dimmer choke',
    dial: 60,
    pairing: pairing(europe, dimmer(25, 14, { choke: choke(3e-3) }), [[1, small(12)]]),
  },
  {
    name: 'one 8 W reservoir lamp without a snubber',
    dial: 55,
    pairing: pairing(europe, dimmer(35, 20, { snubber: null }), [[1, small(8)]]),
  },
  {
    name: 'one 8 W reservoir lamp behind 3.3 mH',
    dial: 60,
    pairing: pairing(europe, dimmer(35, 20), [[1, small(8, { inductance: 3.3e-3, inductorLoss: 10e3 })]]),
  },
  {
    name: 'five 10 W reservoir lamps behind 2.2 mH and 100 nF each',
    dial: 45,
    pairing: pairing(europe, dimmer(50, 30), [[5, small(10, { inductance: 2.2e-3, inductorLoss: 6000, capacitance: 100e-9 })]]),
  },
  { name: 'one 9 W reservoir lamp at 120 V', dial: 60, pairing: pairing(america, american(50, 30), [[1, smallAmerican(9)]]) },
  { name: 'five 9 W reservoir lamps at 120 V', dial: 40, pairing: pairing(america, american(30, 15), [[5, smallAmerican(9)]]) },
  {
    name: 'one 9 W reservoir lamp at 120 V with a damper',
    dial: 70,
    pairing: pairing(america, american(25, 14), [[1, smallAmerican(9, { damper: { resistance: 220, capacitance: 220e-9 } })]]),
  },
  {
    name: 'one reservoir lamp with a passive bleeder',
    dial: 50,
    pairing: pairing(europe, dimmer(25, 14), [[1, small(8, { bleeder: { kind: 'resistor', resistance: 6800 } })]]),
  },
  {
    name: 'one reservoir lamp with an R-C bleeder at 120 V',
    dial: 55,
    pairing: pairing(america, american(35, 20), [
      [1, smallAmerican(8, { bleeder: { kind: 'resistor-capacitor', resistance: 390, capacitance: 220e-9 } })],
    ]),
  },
  {
    name: 'one reservoir lamp with an active bleeder',
    dial: 50,
    pairing: pairing(europe, dimmer(35, 20), [[1, small(8, { bleeder: { kind: 'active', current: 35e-3, below: 400 } })]]),
  },
  {
    name: 'two reservoir lamps with active bleeders that let go at 120 V',
    dial: 40,
    pairing: pairing(europe, dimmer(35, 20), [[2, small(8, { bleeder: { kind: 'active', current: 30e-3, below: 120 } })]]),
  },
  {
    name: 'one reservoir lamp drained by a steady current',
    dial: 55,
    pairing: pairing(europe, dimmer(50, 30), [[1, steadyCurrent(30e-3, 3.3e-6, 80)]]),
  },
  {
    name: 'five reservoir lamps drained by a steady current, 0.47 mH in each',
    dial: 70,
    pairing: pairing(europe, dimmer(40, 25), [[5, steadyCurrent(25e-3, 4.7e-6, 80, { inductance: 0.47e-3, inductorLoss: 2500 })]]),
  },
  {
    name: 'one reservoir lamp with hardly any store, drained by a steady current',
    dial: 60,
    pairing: pairing(europe, dimmer(25, 14), [[1, steadyCurrent(40e-3, 0.33e-6, 100)]]),
  },
  {
    name: 'one 8 W reservoir lamp beside a 25 W filament lamp',
    dial: 60,
    pairing: pairing(europe, dimmer(50, 30), [
      [1, small(8)],
      [1, filament(25, europe)],
    ]),
  },
  {
    name: 'three reservoir lamps beside two resistor-like lamps',
    dial: 50,
    pairing: pairing(europe, dimmer(35, 20), [
      [3, small(6)],
      [2, emulator(8, europe, 68e-9)],
    ]),
  },
  {
    name: 'one reservoir lamp with a 10 kOhm added load',
    dial: 50,
    pairing: pairing(europe, dimmer(35, 20), [[1, small(6)]], { kind: 'resistor', resistance: 10e3 }),
  },
  {
    name: 'one reservoir lamp on a dimmer with an interference capacitor',
    dial: 60,
    pairing: pairing(europe, dimmer(50, 30, { interferenceCapacitance: 100e-9, choke: choke(1.5e-3) }), [[1, small(8)]]),
  },
  {
    name: 'one reservoir lamp on a dimmer with two timing sections',
    dial: 65,
    pairing: pairing(europe, dimmer(40, 25, { drive: { ...diac, secondSection: { resistance: 15e3, capacitance: 47e-9 } } }), [
      [1, small(8)],
    ]),
  },
  {
    name: 'one reservoir lamp under a timed single pulse',
    dial: 50,
    pairing: pairing(europe, dimmer(35, 20, { drive: timed }), [[1, small(8)]]),
  },
  {
    name: 'five reservoir lamps under a train of pulses',
    dial: 60,
    pairing: pairing(europe, dimmer(50, 30, { drive: { ...timed, pulses: 'train' } }), [[5, small(8)]]),
  },
  {
    name: 'one reservoir lamp under a held gate at 120 V',
    dial: 70,
    pairing: pairing(america, dimmer(50, 30, { drive: { ...timed, pulses: 'held' } }), [[1, smallAmerican(9)]]),
  },
  {
    name: 'three 12 W reservoir lamps at 120 V behind 1 mH each',
    dial: 55,
    pairing: pairing(america, american(50, 30), [[3, smallAmerican(12, { inductance: 1e-3, inductorLoss: 3000 })]]),
  },
  {
    name: 'four 7 W reservoir lamps with dampers low on the dial',
    dial: 30,
    pairing: pairing(europe, dimmer(60, 40), [[4, small(7, { damper: { resistance: 470, capacitance: 100e-9 } })]]),
  },
  {
    name: 'five 4 W reservoir lamps at 120 V without input capacitors, wandering',
    dial: 65,
    tolerances: { stray: 10e-12 },
    pairing: pairing(america, american(50, 30, { choke: choke(0.3e-3), snubber: { resistance: 100, capacitance: 100e-9 } }), [
      [5, reservoir(4, 6e-6, 40, { inductance: 1e-3, inductorLoss: 4000 })],
    ]),
  },
  {
    name: 'five 4 W reservoir lamps behind 3 mH each near full dial, wandering',
    dial: 95,
    pairing: pairing(
      europe,
      dimmer(25, 14, { choke: choke(3e-3), snubber: { resistance: 100, capacitance: 100e-9 }, interferenceCapacitance: 100e-9 }),
      [[5, reservoir(4, 2e-6, 60, { capacitance: 47e-9, inductance: 3e-3, inductorLoss: 4000 })]],
    ),
  },
  {
    name: 'one 7 W reservoir lamp at 120 V that skips at random',
    dial: 65,
    pairing: pairing(
      america,
      american(25, 14, { choke: choke(1e-3), snubber: { resistance: 100, capacitance: 100e-9 }, interferenceCapacitance: 47e-9 }),
      [[1, reservoir(7, 10.5e-6, 40, { capacitance: 10e-9, inductance: 1e-3, inductorLoss: 4000 })]],
    ),
  },
  {
    name: 'one 7 W reservoir lamp at 230 V that skips at random',
    dial: 65,
    pairing: pairing(europe, dimmer(35, 20, { choke: choke(1e-3), snubber: null, interferenceCapacitance: 100e-9 }), [
      [1, reservoir(7, 3.5e-6, 60, { capacitance: 10e-9 })],
    ]),
  },
];
