/** Parameters and answers of the calls that put, read, delete and list the catalogue's entries. */
import { z } from 'zod';
import { entryId } from './entry.ts';
import { cursorField, limitField, nextCursorField, numberText } from './url-values.ts';

export const entryParams = (kind: 'dimmer' | 'lamp') => z.strictObject({ id: entryId(kind) });

export const entryQuery = z.strictObject({
  revision: numberText(1, 999_999, 'An earlier revision, also of a deleted entry; absent for the latest.', true).optional(),
});

const searchText = (most: number, description: string) => {
  const error = `must be text of 1 to ${most} characters, given once`;
  return z.string({ error }).min(1, { error }).max(most, { error }).optional().describe(description);
};

const RATED = {
  dimmer: 'rated maximum load',
  lamp: 'rated power',
} as const;

export const entryListQuery = (kind: 'dimmer' | 'lamp') =>
  z.strictObject({
    name: searchText(100, 'Beginnings of words of the name, in any order, without regard to case and accents.'),
    tag: searchText(40, 'Exactly this tag.'),
    articleNumber: searchText(64, 'Exactly this article number.'),
    ratedPowerFrom_W: numberText(0, 10_000, `Lowest ${RATED[kind]}.`).optional(),
    ratedPowerTo_W: numberText(0, 10_000, `Highest ${RATED[kind]}.`).optional(),
    limit: limitField,
    cursor: cursorField,
  });

export type EntryListQuery = z.output<ReturnType<typeof entryListQuery>>;

export const entryHeading = z
  .object({
    id: z.string(),
    revision: z.int(),
    name: z.string().nullable(),
    articleNumber: z.string().nullable(),
    ratedPower_W: z.number().nullable().describe('Rated power of a lamp, rated maximum load of a dimmer.'),
    tags: z.array(z.string()),
    revisedAt: z.string().meta({ format: 'date-time' }),
  })
  .meta({ id: 'EntryHeading', description: 'An entry of the catalogue as lists show it.' });

export type EntryHeading = z.output<typeof entryHeading>;

export const entryList = z.object({
  items: z.array(entryHeading).describe('By id. Where a search is rare, a page may hold fewer than asked for and have a next one.'),
  nextCursor: nextCursorField,
});
