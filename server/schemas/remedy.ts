/** Changes that cure a pairing, on the wire, each with what it costs. */
import { z } from 'zod';
import { gradeField, lowestDialField } from './grade.ts';
import { circuitField } from './lamp-counts.ts';
import { valueWouldSettle } from './would-settle.ts';

const KINDS = ['low-end-trim', 'added-resistor', 'bypass', 'more-lamps'] as const;

const outcome = {
  grade: gradeField,
  lowestDial_pct: lowestDialField,
  power_W: z.number().describe('What it adds at most: heat, or further lamps.'),
  parts: z.int().describe('Parts to buy and fit.'),
  hingesOn: valueWouldSettle
    .nullable()
    .describe(
      'The assumed value that would undo it within its usual range: with this remedy the pairing is undetermined until it is known.',
    ),
  detail: z.string().describe('What to do and what it costs.'),
};
const heat = {
  hottestAt_pct: z.number().describe('Dial position at which it turns the most to heat.'),
  ratedPower_W: z.number().describe('The power rating to buy.'),
};

const remedy = z
  .discriminatedUnion('kind', [
    z.object({
      kind: z.literal('low-end-trim'),
      ...outcome,
      position_pct: z.number().describe('Lowest dial setting the trim must allow.'),
    }),
    z.object({ kind: z.literal('added-resistor'), ...outcome, resistance_kOhm: z.number(), ...heat }),
    z.object({
      kind: z.literal('bypass'),
      ...outcome,
      resistance_Ohm: z.number(),
      capacitance_nF: z.number(),
      ...heat,
      capacitorClass_V: z
        .number()
        .nullable()
        .describe('R.m.s. voltage class of the capacitor; null where none of the usual ones is enough.'),
      peakVoltage_V: z.number().describe('The largest that rings across the lamps.'),
    }),
    z.object({
      kind: z.literal('more-lamps'),
      ...outcome,
      group: z.int().describe('Which of `pairing.lamps`, from 0.'),
      added: z.int().describe('How many more of it.'),
    }),
  ])
  .meta({ id: 'Remedy', description: 'A change that was simulated at every corner and makes the pairing better.' });

export const remedies = z
  .object({
    circuit: circuitField,
    grade: gradeField.describe('Without any remedy, over the corners.'),
    found: z.array(remedy).describe('Cheapest first: by watts, then by parts. Empty where none was found.'),
    tried: z.array(z.object({ kind: z.enum(KINDS), candidates: z.int() })).describe('What was simulated, found wanting or not.'),
    summary: z.string(),
  })
  .meta({ id: 'Remedies', description: 'What cures the pairing.' });

export type RemediesAnswer = z.output<typeof remedies>;
