/**
 * A catalogue entry on the wire: the dimmer or the lamp as a pairing would have it, beside the owner's free text. What is not sent is
 * not stored; defaults are filled in when a pairing with the entry is judged.
 */
import { z } from 'zod';
import { askedDimmer } from './dimmer.ts';
import { askedLamp } from './lamp.ts';

/** Letters, digits and three marks that no URL has to escape. */
const ENTRY_ID = /^[A-Za-z0-9][A-Za-z0-9._-]{0,63}$/;

export const entryId = (of: 'dimmer' | 'lamp') =>
  z
    .string({ error: `must be the id of a ${of}` })
    .regex(ENTRY_ID, { error: 'must be 1 to 64 letters, digits, dots, dashes or underscores, the first a letter or a digit' })
    .describe(`Id of a ${of}, chosen by its owner: 1 to 64 letters, digits, dots, dashes or underscores, the first a letter or a digit.`);

/** Controls, halves of surrogate pairs, and the marks that turn the writing direction round: what they hide can mislead a reader. */
const HIDDEN = /[\p{Cc}\p{Cs}\u202a-\u202e\u2066-\u2069]/u;

function freeText(most: number, is: string, lines: 'one line' | 'lines') {
  const error = `must be text of 1 to ${most} characters`;
  return z
    .string({ error })
    .min(1, { error })
    .max(most, { error })
    .refine((text) => text === text.trim(), { error: 'must not begin or end with a space' })
    .refine((text) => !HIDDEN.test(lines === 'lines' ? text.replace(/[\t\r\n]/g, '') : text), {
      error: 'must not contain control characters',
    })
    .describe(`${is}. 1 to ${most} characters.`);
}

export const tagField = freeText(40, 'A word of the owner’s, to find entries by', 'one line');
export const nameField = freeText(200, 'What the owner calls it', 'one line');
export const articleNumberField = freeText(64, 'The owner’s own article number', 'one line');

const MOST_TAGS = 20;

const textFields = {
  name: nameField.optional(),
  note: freeText(2000, 'Anything the owner wants to remember', 'lines').optional(),
  tags: z
    .array(tagField, { error: `must be a list of at most ${MOST_TAGS} tags` })
    .max(MOST_TAGS)
    .refine((tags) => new Set(tags).size === tags.length, { error: 'must not hold a tag twice' })
    .optional()
    .describe(`Up to ${MOST_TAGS} words to find entries by. Their order means nothing.`),
  articleNumber: articleNumberField.optional(),
};

export const dimmerEntry = z
  .strictObject({ ...textFields, dimmer: askedDimmer.describe('The dimmer, as in a pairing.') })
  .meta({ id: 'DimmerEntry', description: 'A dimmer with what its owner says about it.' });

export const lampEntry = z
  .strictObject({ ...textFields, lamp: askedLamp.describe('The lamp, as in a pairing.') })
  .meta({ id: 'LampEntry', description: 'A lamp with what its owner says about it.' });

const stamp = (description: string) => z.string().meta({ format: 'date-time', description });

const standing = {
  id: z.string(),
  revision: z.int().describe('Rises by one with every edit. The ETag is this number in quotes.'),
  createdAt: stamp('When the entry was first put, UTC.'),
  revisedAt: stamp('When this revision was put, UTC.'),
};

export const storedDimmer = z
  .object({ ...standing, ...textFields, dimmer: askedDimmer })
  .meta({ id: 'StoredDimmer', description: 'A dimmer of the catalogue.' });

export const storedLamp = z
  .object({ ...standing, ...textFields, lamp: askedLamp })
  .meta({ id: 'StoredLamp', description: 'A lamp of the catalogue.' });

export type DimmerEntry = z.output<typeof dimmerEntry>;
export type LampEntry = z.output<typeof lampEntry>;
export type Entry = DimmerEntry | LampEntry;
export type StoredEntry = z.output<typeof storedDimmer> | z.output<typeof storedLamp>;
