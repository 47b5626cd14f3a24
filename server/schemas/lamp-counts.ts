/** The grade for each number of lamps, on the wire. */
import { z } from 'zod';
import { cornerName, gradeField, lowestDialField } from './grade.ts';

export const stopCause = z
  .enum(['holding', 'latching', 'ringing', 'peak-current', 'rating', 'dark', 'lopsided', 'uneven', 'undecided'])
  .describe(
    'holding, latching: too little current to stay on, to latch. ringing: the trough of a ring. peak-current, rating: a rating of the dimmer. dark: never lit. lopsided, uneven: polarities, half-cycles differ. undecided: not to be decided.',
  );

export const circuitField = z
  .string()
  .nullable()
  .describe('The circuit it was simulated with, where the lamps may have several: the one that does worst. Else null.');

export const lampCounts = z
  .object({
    group: z.int().describe('Which of `pairing.lamps` was varied, from 0; the others stay.'),
    circuit: circuitField,
    counts: z.array(
      z.object({
        count: z.int(),
        grade: gradeField,
        decidedBy: cornerName,
        lowestDial_pct: lowestDialField,
        cause: stopCause.nullable().describe('Why it does not work; null where it does.'),
        detail: z.string(),
      }),
    ),
    smallest: z.int().nullable().describe('Smallest count that is suitable or conditional; null where none is.'),
    largest: z.int().nullable(),
    unbroken: z.boolean().describe('Every count between the two works.'),
    below: stopCause.nullable().describe('Why the next smaller count does not work; null where the range ends there.'),
    above: stopCause.nullable(),
    summary: z.string(),
  })
  .meta({
    id: 'LampCounts',
    description: 'How many lamps work, each count simulated at every corner, with what was assumed taken as it stands.',
  });

export type LampCountsAnswer = z.output<typeof lampCounts>;
