/** Looking up the verdicts of many pairs at once, on the wire. */
import { z } from 'zod';
import { entryId } from './entry.ts';
import { gradeField } from './grade.ts';
import { mainsFields } from './pairing.ts';
import { list, wholeNumber } from './quantities.ts';
import { summaryField } from './verdict.ts';

export const MOST_LOOKUPS = 1000;

const OUTCOMES = ['judged', 'stale', 'not-screened', 'unknown-dimmer', 'unknown-lamp'] as const;

export const lookupRequest = z
  .strictObject({
    pairs: list(
      z.strictObject({
        dimmerId: entryId('dimmer'),
        lampId: entryId('lamp'),
        count: wholeNumber(1, 500, { is: 'How many of this lamp are on the circuit' }),
      }),
      1,
      MOST_LOOKUPS,
      'pairs',
      'A dimmer, a lamp and how many of it',
    ),
    mains: z
      .strictObject({ voltage_V: mainsFields.voltage_V, frequency_Hz: mainsFields.frequency_Hz })
      .optional()
      .describe('Only verdicts at exactly this mains; absent for the newest at any.'),
  })
  .meta({
    id: 'VerdictLookup',
    description: 'Pairs of the catalogue whose stored verdicts are wanted.',
    examples: [{ pairs: [{ dimmerId: 'landing-old', lampId: 'candle-8', count: 4 }], mains: { voltage_V: 230, frequency_Hz: 50 } }],
  });

export const lookupAnswer = z.object({
  items: z
    .array(
      z.object({
        dimmerId: z.string(),
        lampId: z.string(),
        count: z.int(),
        outcome: z
          .enum(OUTCOMES)
          .describe(
            'judged: the newest verdict of what the catalogue says now. stale: there are verdicts only of earlier revisions, this is the newest. not-screened: none yet. unknown-dimmer, unknown-lamp: the catalogue has no such entry.',
          ),
        verdict: z
          .object({
            id: z.string(),
            modelVersion: z.string(),
            createdAt: z.string().meta({ format: 'date-time' }),
            grade: gradeField,
            summary: summaryField,
            mains: z.object({ voltage_V: z.number(), frequency_Hz: z.number() }),
            dimmerRevision: z.int(),
            lampRevision: z.int(),
          })
          .meta({ id: 'PairVerdict', description: 'A stored verdict of a pair, without evidence.' })
          .nullable(),
      }),
    )
    .describe('In the order of the pairs that were asked for.'),
});

export type LookupRequest = z.output<typeof lookupRequest>;
export type LookupItem = z.output<typeof lookupAnswer>['items'][number];
