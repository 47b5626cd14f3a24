/** Parameters and answers of the calls about screenings: ids, pages, where to resume a stream, rows of results. */
import { z } from 'zod';
import { GRADES } from './grade.ts';
import { screening } from './screening.ts';
import { cursorField, limitField, nextCursorField } from './url-values.ts';

export const screeningParams = z.strictObject({
  id: z
    .string()
    .regex(/^[0-9a-f]{26}$/, { error: 'must be 26 hexadecimal digits in lower case, as `id` of a screening has them' })
    .describe('Id of a screening.'),
});

export const screeningListQuery = z.strictObject({ limit: limitField, cursor: cursorField });

export const screeningList = z.object({ items: z.array(screening).describe('Newest first.'), nextCursor: nextCursorField });

export const eventsHeaders = z.object({
  'last-event-id': z
    .string()
    .regex(/^\d{1,15}$/, { error: 'must be the `id` of an event of this stream' })
    .optional()
    .describe('The last event that was seen: what came after it follows.'),
});

export const resultRow = z
  .object({
    lampId: z.string(),
    dimmerId: z.string(),
    count: z.int(),
    outcome: z.enum(['stored', 'judged', 'failed']).describe('`stored`: judged before this screening came to it.'),
    grade: z.enum(GRADES).nullable(),
    summary: z.string().describe('Of the verdict; where it failed, why.'),
    verdictId: z.string().nullable(),
    failure: z
      .object({ kind: z.string(), attempts: z.int(), pairing: z.unknown().describe('What was to be judged.') })
      .optional()
      .describe('Where it failed.'),
  })
  .meta({ id: 'ScreeningResult', description: 'What became of one pairing. CSV has all columns but `failure`.' });
