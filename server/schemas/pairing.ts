/**
 * A pairing on the wire: as asked (`referringPairing`, the body of POST /v1/verdicts; `askedPairing` once its references are resolved) and
 * as judged (`judgedPairing`, every default filled in). What was judged is itself a valid question: the same circuit with nothing left to
 * assume.
 */
import { z } from 'zod';
import { MOST_COUNTS } from '../../model/index.ts';
import { MAINS_DEFAULTS, OPTIONS_DEFAULTS } from '../verdicts/pairing-defaults.ts';
import { askedDimmer, judgedDimmer } from './dimmer.ts';
import { entryId } from './entry.ts';
import { askedLamp, judgedLamp } from './lamp.ts';
import { choice, list, numberAt, quantity, type Report, reportNotRising, wholeNumber, withRule } from './quantities.ts';

export const mainsFields = {
  voltage_V: quantity('V', 85, 265, { is: 'R.m.s. voltage of the mains' }),
  frequency_Hz: quantity('Hz', 45, 65, { is: 'Frequency of the mains' }),
  sourceResistance_Ohm: quantity('Ohm', 0.01, 20, { is: 'Resistance of the wiring', otherwise: MAINS_DEFAULTS.sourceResistance_Ohm }),
};

const addedLoad = z
  .discriminatedUnion('kind', [
    z.strictObject({
      kind: z.literal('resistor'),
      resistance_kOhm: quantity('kOhm', 0.1, 10_000, { is: 'Resistor across the lamps; it runs hot' }),
    }),
    z.strictObject({
      kind: z.literal('resistor-capacitor'),
      resistance_Ohm: quantity('Ohm', 1, 100_000, { is: 'Resistor of an R-C across the lamps' }),
      capacitance_nF: quantity('nF', 0, 10_000, { is: 'Capacitor of an R-C across the lamps, 0 for none' }),
    }),
  ])
  .nullable()
  .describe('A load added across the lamps, or null. Default null.');

const SUPPLY_BAND = 'Between which voltages the mains may lie, where every corner is judged.';
const supplyBandFields = {
  low_pct: quantity('%', 50, 100, { is: 'Lowest mains voltage, of the nominal one', otherwise: "Default: by the supply's standard." }),
  high_pct: quantity('%', 100, 150, { is: 'Highest mains voltage, of the nominal one', otherwise: "Default: by the supply's standard." }),
};

const lampCountFields = {
  from: wholeNumber(1, 500, { is: 'Smallest count' }),
  to: wholeNumber(1, 500, { is: `Largest count, at most ${MOST_COUNTS - 1} above the smallest` }),
  group: wholeNumber(0, 11, { is: 'Which of `lamps` is varied, counted from 0', otherwise: 'Default 0.' }),
};
const LAMP_COUNT =
  'Grade every number of lamps from one to another as well, and say where it stops being workable and why. Default null: the stated count alone.';

const optionFields = {
  dialPositions_pct: withRule(
    list(
      quantity('%', 0, 100, { is: 'Dial position, 100 is brightest' }),
      1,
      101,
      'dial positions',
      'Where on the dial the pairing is judged, rising. The dial is swept up from dark and down again; one position alone is judged from a fresh start. Default 0 to 100 in steps of 5',
    ),
    (sent, report) => reportNotRising(sent, [], '%', report),
  ),
  dropOutAngle_deg: quantity('deg', 0.1, 90, {
    is: "How much earlier than the lamps' own current would have ended it a conduction must end to count as a drop-out",
    otherwise: OPTIONS_DEFAULTS.dropOutAngle_deg,
  }),
  corners: choice(['all', 'nominal'], {
    is: 'all: mains from low to high, currents cold and typical, and whether the grade hinges on a value that was assumed. nominal: the nominal corner alone',
    otherwise: OPTIONS_DEFAULTS.corners,
  }),
  remedies: z
    .boolean({ error: 'must be true or false' })
    .describe(
      'Where the pairing is not suitable, look for what cures it: a low-end trim, an added resistor, an R-C bypass, more lamps. Each is simulated at every corner. Takes many times as long. Default false.',
    ),
};

const askedOptions = z
  .strictObject({
    ...optionFields,
    supplyBand: z.strictObject(supplyBandFields).partial().describe(SUPPLY_BAND),
    lampCount: withRule(z.strictObject({ ...lampCountFields, group: lampCountFields.group.optional() }), reportCountsOutOfOrder)
      .nullable()
      .describe(LAMP_COUNT),
  })
  .partial()
  .describe('How the pairing is judged.');

const judgedOptions = z.object({
  ...optionFields,
  supplyBand: z.object(supplyBandFields).describe(SUPPLY_BAND),
  lampCount: z.object(lampCountFields).nullable().describe(LAMP_COUNT),
});

function reportCountsOutOfOrder(sent: unknown, report: Report): void {
  const from = numberAt(sent, 'from');
  const to = numberAt(sent, 'to');
  if (from === undefined || to === undefined || (to >= from && to - from < MOST_COUNTS)) return;
  report(['to'], `must be from ${from} (\`from\`) to ${from + MOST_COUNTS - 1}: at most ${MOST_COUNTS} counts are judged at once`);
}

const countField = wholeNumber(1, 500, { is: 'How many of this lamp are on the circuit' });

export const EXAMPLE_PAIRING = {
  mains: { voltage_V: 230, frequency_Hz: 50 },
  dimmer: { latchingCurrent_mA: 60, holdingCurrent_mA: 35 },
  lamps: [
    {
      count: 4,
      lamp: {
        ratedPower_W: 8,
        load: {
          kind: 'iv-table',
          points: [
            { voltage_V: 0, current_mA: 0 },
            { voltage_V: 60, current_mA: 0 },
            { voltage_V: 325, current_mA: 52 },
          ],
        },
        input: { seriesResistance_Ohm: 22, capacitance_nF: 47 },
      },
    },
  ],
};

const askedMains = z
  .strictObject({ ...mainsFields, sourceResistance_Ohm: mainsFields.sourceResistance_Ohm.optional() })
  .describe('The supply.');
const dimmerInFull = askedDimmer.describe('The dimmer. Only the two triac currents are required.');
const groupInFull = z.strictObject({ count: countField, lamp: askedLamp });
const otherFields = {
  addedLoad: addedLoad.optional(),
  options: askedOptions.optional(),
};
const lampGroups = <G extends z.ZodType>(group: G) =>
  list(group, 1, 12, 'lamp groups', 'The lamps on the circuit, each kind of lamp once with its count');

/** A pairing with everything given in full. */
export const askedPairing = z.strictObject({ mains: askedMains, dimmer: dimmerInFull, lamps: lampGroups(groupInFull), ...otherFields });

/** A pairing in which the dimmer and each lamp may be named by their ids in the catalogue instead. */
export const referringPairing = z
  .strictObject({
    mains: askedMains,
    dimmer: z
      .union([dimmerInFull, z.strictObject({ dimmerId: entryId('dimmer') })])
      .describe("The dimmer in full, or a catalogue's dimmer by its id."),
    lamps: lampGroups(z.union([groupInFull, z.strictObject({ lampId: entryId('lamp'), count: countField })])),
    ...otherFields,
  })
  .meta({
    id: 'AskedPairing',
    description:
      'One dimmer, one or more groups of lamps, the mains, and an optional added load. A dimmer or a lamp of the catalogue can be named by its id; it is judged as its latest revision says.',
    examples: [EXAMPLE_PAIRING],
  });

export const judgedPairing = z
  .object({
    mains: z.object(mainsFields),
    dimmer: judgedDimmer,
    lamps: z.array(z.object({ count: countField, lamp: judgedLamp })),
    addedLoad,
    options: judgedOptions,
  })
  .meta({
    id: 'JudgedPairing',
    description: 'The pairing with every default filled in. Sent as a question it is judged as it stands, with nothing assumed.',
  });

export type ReferringPairing = z.output<typeof referringPairing>;
export type AskedPairing = z.output<typeof askedPairing>;
export type AskedDimmer = AskedPairing['dimmer'];
export type AskedLamp = AskedPairing['lamps'][number]['lamp'];
export type JudgedPairing = z.output<typeof judgedPairing>;
export type JudgedDimmer = JudgedPairing['dimmer'];
export type JudgedLamp = JudgedPairing['lamps'][number]['lamp'];
