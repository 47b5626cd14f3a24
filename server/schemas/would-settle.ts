/** What would settle an undetermined grade: a value to measure, or a circuit to ask for. */
import { z } from 'zod';
import { cornerName, gradeField } from './grade.ts';

const value = z.object({
  kind: z.literal('value').describe('An assumed value on which the grade hinges.'),
  path: z.string().describe('Where the value stands in `pairing`. Its unit, at the end, is that of the figures here.'),
  what: z.string(),
  assumed: z.number(),
  threshold: z
    .object({ low: z.number(), high: z.number() })
    .describe('The grade over all corners flips between these two; found by simulation.'),
  gradeBelow: gradeField,
  gradeAbove: gradeField,
  corner: cornerName.describe('Which decides on the side that does not work.'),
  measure: z.string().describe('How one would find the real value out.'),
  detail: z.string(),
  alsoOpen: z.array(z.string()).describe('Other assumed values that look as if they flipped the grade too.'),
});

export const wouldSettle = z
  .discriminatedUnion('kind', [
    value,
    z.object({
      kind: z.literal('circuit').describe('The circuit inside a lamp, where the circuits that it may have are judged both ways.'),
      ask: z.string().describe('What to ask the maker for.'),
      detail: z.string(),
    }),
  ])
  .meta({ id: 'WouldSettle', description: 'What would turn an undetermined grade into a sure one.' });

export const valueWouldSettle = value.meta({ id: 'ValueWouldSettle', description: 'An assumed value on which a grade hinges.' });

export type ValueWouldSettleAnswer = z.output<typeof value>;
export type WouldSettleAnswer = z.output<typeof wouldSettle>;
