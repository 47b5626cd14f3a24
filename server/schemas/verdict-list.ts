/** The list of stored verdicts on the wire: its filters, what an item shows, and what an item can show on demand. */
import { z } from 'zod';
import { entryId } from './entry.ts';
import { GRADES, gradeField } from './grade.ts';
import { choiceOf, cursorField, flagText, limitField, momentText, namesText, nextCursorField, numberText } from './url-values.ts';
import { createdAtField, summaryField, VERDICT_FIELDS, verdict } from './verdict.ts';

export const countText = numberText(1, 6000, 'How many lamps are on the circuit.', true);
export const mainsVoltageText = numberText(85, 265, 'At exactly this mains voltage.');
export const mainsFrequencyText = numberText(45, 65, 'At exactly this mains frequency.');

const judgedFor = z
  .object({
    dimmerId: z.string().nullable().describe('Null where the dimmer was given in full.'),
    dimmerRevision: z.int().nullable(),
    lampId: z.string().nullable().describe('Null where the lamp was given in full.'),
    lampRevision: z.int().nullable(),
    count: z.int().describe('How many of this lamp. A mixed circuit has one entry here for each kind of lamp.'),
    stale: z
      .boolean()
      .describe('The dimmer or a lamp of the circuit was edited or deleted since: this is not what the catalogue says now.'),
  })
  .meta({ id: 'JudgedFor', description: 'The revisions of catalogue entries that a verdict judged.' });

const mainsField = z.object({ voltage_V: z.number(), frequency_Hz: z.number() });

export const verdictHeading = z
  .object({
    id: z.string(),
    modelVersion: z.string(),
    createdAt: createdAtField,
    grade: gradeField,
    summary: summaryField,
    mains: mainsField,
    count: z.int().describe('All lamps on the circuit.'),
    judgedFor: z.array(judgedFor).describe('What it was asked for by id, the first 20; empty where everything was given in full.'),
  })
  .meta({ id: 'VerdictHeading', description: 'A stored verdict as lists show it.' });

const HEADING_FIELDS = Object.keys(verdictHeading.shape) as (keyof VerdictHeading)[];
export const LIST_FIELDS = [...new Set([...HEADING_FIELDS, ...VERDICT_FIELDS])];

/** With `fields`, any of these; without, a heading. */
const verdictListItem = verdictHeading
  .extend(verdict.shape)
  .partial()
  .meta({ id: 'VerdictListItem', description: 'A heading (VerdictHeading), or of it and of the verdict the fields that were asked for.' });

const idOf = (kind: 'dimmer' | 'lamp') => entryId(kind).describe(`Only verdicts that were asked for this ${kind} by its id.`);

export const verdictListQuery = z.strictObject({
  lampId: idOf('lamp').optional(),
  dimmerId: idOf('dimmer').optional(),
  stale: flagText(
    'true: only verdicts asked for entries that were edited or deleted since. false: only those asked for entries that are still as judged.',
  ).optional(),
  grade: z
    .enum(GRADES, { error: choiceOf(GRADES) })
    .optional()
    .describe('Only verdicts of this grade.'),
  count: countText.optional(),
  mainsVoltage_V: mainsVoltageText.optional(),
  mainsFrequency_Hz: mainsFrequencyText.optional(),
  modelVersion: z
    .string({ error: 'must be a model version, given once' })
    .min(1, { error: 'must not be empty' })
    .max(40, { error: 'must be at most 40 characters' })
    .optional()
    .describe('Only verdicts of this model version.'),
  createdFrom: momentText('Only verdicts computed at this moment or later.').optional(),
  createdBefore: momentText('Only verdicts computed before this moment.').optional(),
  fields: namesText(
    LIST_FIELDS,
    'What an item shows, as `id,grade,conditions`. Absent: a heading, without evidence. The dial rows come only where `dial` is named.',
  ).optional(),
  limit: limitField,
  cursor: cursorField,
});

export const verdictList = z.object({
  items: z.array(verdictListItem).describe('Newest first.'),
  nextCursor: nextCursorField.describe(
    'Where the next page begins; null at the end. Where a search is rare, a page may hold fewer items than asked for and have a next one.',
  ),
});

export type VerdictListQuery = z.output<typeof verdictListQuery>;
export type VerdictHeading = z.output<typeof verdictHeading>;
export type VerdictListItem = z.output<typeof verdictListItem>;
export type JudgedFor = z.output<typeof judgedFor>;
