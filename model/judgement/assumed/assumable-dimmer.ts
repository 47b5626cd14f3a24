/**
 * The dimmer's values that steadiness may hinge on, with the ranges of generic parts (common practice and memory, no published source).
 * What is missing here (on-voltage, diac resistance, wiring resistance) moves a firing angle by less than its dial position does.
 */
import type { DiacDrive, Dimmer, Pairing, TimedDrive } from '../../pairing.ts';
import { type Assumable, always, bySupply } from './assumable.ts';

const NO_TEST = 'Ask the maker, or measure it with the part out of circuit and the mains off.';

type Get = (dimmer: Dimmer) => number | null;
type Put = (dimmer: Dimmer, value: number) => Dimmer;

function ofDimmer(about: Pick<Assumable, 'what' | 'unit' | 'scale' | 'range' | 'measure'>, get: Get, put: Put): Assumable {
  return {
    ...about,
    read: ({ dimmer }) => get(dimmer),
    write: (pairing: Pairing, _group, value) => ({ ...pairing, dimmer: put(pairing.dimmer, value) }),
  };
}

type Numbers<T> = { [K in keyof T]: T[K] extends number ? K : never }[keyof T];

function ofDiac(about: Pick<Assumable, 'what' | 'unit' | 'scale' | 'range' | 'measure'>, field: Numbers<DiacDrive>): Assumable {
  return ofDimmer(
    about,
    ({ drive }) => (drive.kind === 'diac' ? drive[field] : null),
    (dimmer, value) => (dimmer.drive.kind === 'diac' ? { ...dimmer, drive: { ...dimmer.drive, [field]: value } } : dimmer),
  );
}

function ofTimed(about: Pick<Assumable, 'what' | 'unit' | 'scale' | 'range' | 'measure'>, field: Numbers<TimedDrive>): Assumable {
  return ofDimmer(
    about,
    ({ drive }) => (drive.kind === 'timed' ? drive[field] : null),
    (dimmer, value) => (dimmer.drive.kind === 'timed' ? { ...dimmer, drive: { ...dimmer.drive, [field]: value } } : dimmer),
  );
}

export const ASSUMABLE_OF_DIMMER: { readonly [path: string]: Assumable } = {
  'dimmer.turnOffTime': ofDimmer(
    {
      what: "the triac's turn-off time",
      unit: 'us',
      scale: 1e-6,
      range: always(10e-6, 40e-6),
      measure: "Ask the maker of the dimmer which triac it has: the turn-off time is in the triac's data sheet, or its maker tells it.",
    },
    (dimmer) => dimmer.turnOffTime,
    (dimmer, value) => ({ ...dimmer, turnOffTime: value }),
  ),
  'dimmer.choke.inductance': ofDimmer(
    { what: "the dimmer's choke", unit: 'mH', scale: 1e-3, range: always(40e-6, 150e-6), measure: NO_TEST },
    ({ choke }) => choke.inductance,
    (dimmer, value) => ({ ...dimmer, choke: { ...dimmer.choke, inductance: value } }),
  ),
  'dimmer.snubber.capacitance': ofDimmer(
    { what: "the dimmer's snubber capacitor", unit: 'nF', scale: 1e-9, range: always(10e-9, 100e-9), measure: NO_TEST },
    ({ snubber }) => snubber?.capacitance ?? null,
    (dimmer, value) => (dimmer.snubber === null ? dimmer : { ...dimmer, snubber: { ...dimmer.snubber, capacitance: value } }),
  ),
  'dimmer.snubber.resistance': ofDimmer(
    { what: "the dimmer's snubber resistor", unit: 'Ohm', scale: 1, range: always(33, 330), measure: NO_TEST },
    ({ snubber }) => snubber?.resistance ?? null,
    (dimmer, value) => (dimmer.snubber === null ? dimmer : { ...dimmer, snubber: { ...dimmer.snubber, resistance: value } }),
  ),
  'dimmer.interferenceCapacitance': ofDimmer(
    { what: 'the interference capacitor across the dimmer', unit: 'nF', scale: 1e-9, range: always(0, 150e-9), measure: NO_TEST },
    (dimmer) => dimmer.interferenceCapacitance,
    (dimmer, value) => ({ ...dimmer, interferenceCapacitance: value }),
  ),
  'dimmer.drive.breakover': ofDimmer(
    {
      what: "the diac's breakover voltage",
      unit: 'V',
      scale: 1,
      range: always(30, 35),
      measure:
        'Record the voltage across the timing capacitor with an isolated differential probe (live parts: licensed practice): it breaks over where the voltage collapses.',
    },
    ({ drive }) => (drive.kind === 'diac' ? (drive.breakover.positive + drive.breakover.negative) / 2 : null),
    (dimmer, value) =>
      dimmer.drive.kind === 'diac' ? { ...dimmer, drive: { ...dimmer.drive, breakover: { positive: value, negative: value } } } : dimmer,
  ),
  'dimmer.drive.capacitance': ofDiac(
    { what: 'the timing capacitor', unit: 'nF', scale: 1e-9, range: always(82e-9, 120e-9), measure: NO_TEST },
    'capacitance',
  ),
  'dimmer.drive.fixedResistance': ofDiac(
    { what: 'the fixed timing resistor', unit: 'kOhm', scale: 1e3, range: bySupply([10e3, 33e3], [4.7e3, 15e3]), measure: NO_TEST },
    'fixedResistance',
  ),
  'dimmer.drive.gateResistance': ofDiac(
    { what: 'the gate resistor', unit: 'Ohm', scale: 1, range: always(22, 220), measure: NO_TEST },
    'gateResistance',
  ),
  'dimmer.drive.gateThreshold': ofDiac(
    {
      what: "the triac's gate trigger current",
      unit: 'mA',
      scale: 1e-3,
      range: always(5e-3, 50e-3),
      measure: 'Ask the maker of the dimmer which triac it has: the gate trigger current is in its data sheet.',
    },
    'gateThreshold',
  ),
  'dimmer.drive.firingAngleFull': ofTimed(
    {
      what: 'the firing angle at full dial',
      unit: 'deg',
      scale: 1,
      range: always(10, 40),
      measure: 'Record the voltage across a filament lamp on this dimmer at full dial with an isolated probe, and read where it rises.',
    },
    'firingAngleFull',
  ),
  'dimmer.drive.firingAngleLow': ofTimed(
    {
      what: 'the firing angle at the low end of the dial',
      unit: 'deg',
      scale: 1,
      range: always(120, 160),
      measure:
        'Record the voltage across a filament lamp on this dimmer at its lowest setting with an isolated probe, and read where it rises.',
    },
    'firingAngleLow',
  ),
  'dimmer.drive.gatePulse': ofTimed(
    {
      what: 'the length of the gate pulse',
      unit: 'us',
      scale: 1e-6,
      range: always(30e-6, 300e-6),
      measure: 'Ask the maker, or record the gate with an isolated differential probe (live parts: licensed practice).',
    },
    'gatePulse',
  ),
};
