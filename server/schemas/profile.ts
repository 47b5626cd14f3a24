/** A profile on the wire: what a lamp was recorded to draw, as a phase table or as a scope's CSV, and the lamp that was fitted to it. */
import { z } from 'zod';
import { PHASE_TABLE_INPUT_DEFAULTS } from '../verdicts/pairing-defaults.ts';
import { fitFields } from './found-lamp.ts';
import { minimumVoltageAskedOfTable, phasePoints, phaseTableFields } from './lamp-load.ts';
import { choice, quantity, quantityOrNull, wholeNumber } from './quantities.ts';
import { numberText } from './url-values.ts';

const groundFields = {
  ratedPower_W: quantityOrNull('W', 0.1, 2000, {
    is: 'Rated power of the lamp; a scope record that disagrees with it is refused',
    otherwise: 'Default null: not stated.',
  }).optional(),
  seriesResistance_Ohm: quantity('Ohm', 0.1, 10_000, {
    is: 'Fusible or series resistor before the input capacitor, which an undimmed record does not show by itself',
    otherwise: PHASE_TABLE_INPUT_DEFAULTS.seriesResistance_Ohm,
  }).optional(),
  minimumVoltage_V: minimumVoltageAskedOfTable.optional(),
};

const ordered = (of: readonly (readonly string[])[]) => new RegExp(`^(${of.map((choices) => choices.join('|')).join('),(')})$`);
const UNITS = [
  ['s', 'ms', 'us', 'ns'],
  ['V', 'mV', 'kV'],
  ['A', 'mA', 'uA'],
] as const;

const place = (of: string) => wholeNumber(0, 99, { is: `Place of the ${of} column, counted from 0` }).optional();
const unit = <const U extends readonly [string, ...string[]]>(units: U, of: string) =>
  choice(units, { is: `Unit of the ${of} column` }).optional();

const csv = z
  .string({ error: 'must be text: the record as CSV' })
  .min(1, { error: 'must not be empty' })
  .describe(
    'The record: columns of time, voltage and current on undimmed mains, with commas, semicolons or tabs between them. Up to two header rows can name the columns and their units, as `time_s,voltage_V,current_mA`; without, the order is time, voltage, current. At least one whole period of 40 samples or more; several are averaged.',
  );

export const EXAMPLE_PROFILE = {
  kind: 'phase-table',
  voltage_V: 230,
  frequency_Hz: 50,
  points: Array.from({ length: 18 }, (_, index) => {
    const phase_deg = index * 10 + 5;
    const voltage = Math.SQRT2 * 230 * Math.sin((phase_deg * Math.PI) / 180);
    return { phase_deg, current_mA: Number((Math.max(0, voltage - 60) * 0.2).toFixed(1)) };
  }),
  ratedPower_W: 8,
};

export const profileRequest = z
  .discriminatedUnion('kind', [
    z.strictObject({
      kind: z.literal('phase-table').describe('Current against phase, recorded on an undimmed sine.'),
      ...phaseTableFields,
      points: phasePoints,
      ...groundFields,
    }),
    z.strictObject({
      kind: z.literal('scope-record').describe('Time, voltage and current, as a scope exports them.'),
      csv,
      units: z
        .strictObject({
          time: unit(UNITS[0], 'time'),
          voltage: unit(UNITS[1], 'voltage'),
          current: unit(UNITS[2], 'current'),
        })
        .optional()
        .describe('Units that no header names.'),
      columns: z
        .strictObject({ time: place('time'), voltage: place('voltage'), current: place('current') })
        .optional()
        .describe('Columns that no header names, where there are more than three or they stand in another order.'),
      ...groundFields,
    }),
  ])
  .meta({ id: 'ProfileRequest', description: 'What a lamp was recorded to draw from undimmed mains.', examples: [EXAMPLE_PROFILE] });

/** What a URL can say of a record, for one that is sent as CSV by itself. It goes before what the body says. */
export const profileQuery = z
  .strictObject({
    ratedPower_W: numberText(0.1, 2000, 'Rated power of the lamp.'),
    seriesResistance_Ohm: numberText(0.1, 10_000, 'Resistor before the input capacitor.'),
    minimumVoltage_V: numberText(1, 400, 'Voltage below which a reservoir’s drain stops.'),
    units: z
      .string()
      .regex(ordered(UNITS), { error: 'must be units of time, voltage and current, as ms,V,mA' })
      .describe('Units of time, voltage and current that no header names, as `ms,V,mA`.'),
    columns: z
      .string()
      .regex(/^\d{1,2},\d{1,2},\d{1,2}$/, { error: 'must be places of time, voltage and current counted from 0, as 0,1,2' })
      .describe('Places of time, voltage and current that no header names, counted from 0, as `0,1,2`.'),
  })
  .partial();

const scopeFound = z
  .object({
    periods: z.int().describe('Whole periods averaged.'),
    samplesPerPeriod: z.number(),
    frequency_Hz: z.number(),
    voltage_V: z.number().describe('R.m.s. of the fundamental.'),
    voltageOffset_V: z.number().describe('Taken out.'),
    currentOffset_mA: z.number().describe('Taken out.'),
    currentReversed: z.boolean().describe('The current probe was the wrong way round; turned.'),
    noise_mA: z.number().describe('R.m.s. noise of one sample, averaged out.'),
    points: z.array(z.object({ phase_deg: z.number(), current_mA: z.number() })).describe('The averaged phase table that was fitted.'),
  })
  .meta({ id: 'ScopeFound', description: 'What was read from a scope record, and what was taken out of it.' });

export const profile = z
  .object({ ...fitFields, scope: scopeFound.nullable().describe('Null where a phase table was sent.') })
  .meta({ id: 'Profile', description: 'The lamp that was fitted to a record. Nothing of it is stored.' });

export type ProfileQuery = z.output<typeof profileQuery>;
export type ProfileRequest = z.output<typeof profileRequest>;
export type Profile = z.output<typeof profile>;
