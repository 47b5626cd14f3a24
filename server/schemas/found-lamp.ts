/** What was found out about a lamp that was not given by its circuit: what its class spans, or what was fitted to its record. */
import { z } from 'zod';
import { LAMP_CLASSES } from '../../model/index.ts';
import { judgedCircuitLamp } from './lamp.ts';

const pathField = z.string().describe('Which lamp of `pairing`.');
const powerFactor = z.number().describe('On undimmed mains.');

export const foundClass = z
  .object({
    path: pathField,
    class: z.enum(LAMP_CLASSES),
    spans: z.string().describe('What the circuits of the class span, and what they leave out.'),
    ask: z.string().describe('What to ask the maker for to narrow it.'),
    candidates: z.array(
      z.object({
        name: z.string(),
        basis: z.string().describe('Its component values, and what they rest on.'),
        power_W: z.number().describe('On undimmed mains, simulated.'),
        powerFactor,
      }),
    ),
  })
  .meta({ id: 'FoundClass', description: 'The circuits judged for a lamp that is known by its class.' });

const means = z.object({ rmsCurrent_mA: z.number(), power_W: z.number(), powerFactor });

export const fitFields = {
  form: z.enum(['iv-table', 'reservoir']),
  residual_pct: z
    .number()
    .describe('R.m.s. of what the simulated fit leaves, over the r.m.s. of the recorded current. Above 15 % a fit is refused.'),
  otherResidual_pct: z.number().nullable().describe('Of the form that was not chosen; null where it was not tried, or does not run.'),
  recorded: means.describe('Of the record.'),
  fitted: means.describe('Of the fitted lamp, simulated on the recorded sine.'),
  lamp: judgedCircuitLamp.describe('The fitted lamp, to be used as a lamp of a pairing.'),
  taken: z
    .array(z.object({ path: z.string().describe('Where it stands in `lamp`.'), basis: z.string() }))
    .describe('What of the lamp does not come from the record.'),
};

export const foundFit = z
  .object({ path: pathField, ...fitFields })
  .meta({ id: 'FoundFit', description: 'The lamp that was fitted to a phase table.' });

export type FoundClass = z.output<typeof foundClass>;
export type FoundFit = z.output<typeof foundFit>;
