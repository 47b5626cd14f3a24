/** The lamp's values that steadiness may hinge on, with the ranges of generic input stages (from memory, no published source). */
import type { Lamp, LampInput, Load, Pairing } from '../../pairing.ts';
import { type Assumable, always, bySupply } from './assumable.ts';

const OUT_OF_CIRCUIT = 'Ask the maker of the lamp, or open one specimen and measure the part with the lamp disconnected.';

type About = Pick<Assumable, 'what' | 'unit' | 'scale' | 'range' | 'measure'>;

function ofLamp(about: About, get: (lamp: Lamp) => number | null, put: (lamp: Lamp, value: number) => Lamp): Assumable {
  return {
    ...about,
    read: ({ lamps }, group) => {
      const lamp = lamps[group]?.lamp;
      return lamp === undefined ? null : get(lamp);
    },
    write: (pairing: Pairing, group, value) => ({
      ...pairing,
      lamps: pairing.lamps.map((g, k) => (k === group ? { ...g, lamp: put(g.lamp, value) } : g)),
    }),
  };
}

const ofInput = (about: About, field: 'seriesResistance' | 'capacitance'): Assumable =>
  ofLamp(
    about,
    // a filament's leads and its missing capacitor are certain enough
    ({ load, input }) => (load.kind === 'resistive' ? null : input[field]),
    (lamp, value) => ({ ...lamp, input: { ...lamp.input, [field]: value } }),
  );

/** an inductor has a core loss of about 1 kOhm per mH, at least 1 kOhm (from memory), also one that was taken as absent */
function withInductance(input: LampInput, inductance: number): LampInput {
  return { ...input, inductance, inductorLoss: inductance === 0 ? null : Math.max(1e3, 1e6 * inductance) };
}

const ofReservoir = (about: About, field: 'surgeResistance' | 'minimumVoltage'): Assumable =>
  ofLamp(
    about,
    ({ load }) => (load.kind === 'reservoir' ? load[field] : null),
    (lamp, value) => (lamp.load.kind === 'reservoir' ? { ...lamp, load: { ...lamp.load, [field]: value } satisfies Load } : lamp),
  );

export const ASSUMABLE_OF_LAMP: { readonly [path: string]: Assumable } = {
  'lamp.input.seriesResistance': ofInput(
    { what: "the lamp's series resistor", unit: 'Ohm', scale: 1, range: bySupply([10, 47], [4.7, 22]), measure: OUT_OF_CIRCUIT },
    'seriesResistance',
  ),
  'lamp.input.capacitance': ofInput(
    {
      what: "the lamp's input capacitor",
      unit: 'nF',
      scale: 1e-9,
      range: bySupply([22e-9, 150e-9], [47e-9, 330e-9]),
      measure: 'Measure the lamp with a capacitance meter at its terminals, disconnected from the mains and discharged; or ask its maker.',
    },
    'capacitance',
  ),
  'lamp.input.inductance': ofLamp(
    { what: "the lamp's interference choke", unit: 'mH', scale: 1e-3, range: always(0, 4.7e-3), measure: OUT_OF_CIRCUIT },
    ({ load, input }) => (load.kind === 'resistive' ? null : input.inductance),
    (lamp, value) => ({ ...lamp, input: withInductance(lamp.input, value) }),
  ),
  'lamp.load.surgeResistance': ofReservoir(
    {
      what: 'the resistance in series with the reservoir capacitor',
      unit: 'Ohm',
      scale: 1,
      range: always(0.5, 10),
      measure: OUT_OF_CIRCUIT,
    },
    'surgeResistance',
  ),
  'lamp.load.minimumVoltage': ofReservoir(
    {
      what: "the voltage below which the lamp's converter stops",
      unit: 'V',
      scale: 1,
      range: bySupply([30, 120], [15, 60]),
      measure:
        'Lower the mains to the lamp with a variable isolating transformer until it goes out, and multiply by the square root of two.',
    },
    'minimumVoltage',
  ),
};
