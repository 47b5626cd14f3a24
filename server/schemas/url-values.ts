/** Values as a URL carries them: numbers as text, choices, cursors, the length of a page. Each is given once. */
import { z } from 'zod';

export const choiceOf = (values: readonly string[]) => `must be one of ${values.map((value) => JSON.stringify(value)).join(', ')}`;

/** Text that merely coerces to a number (an empty one, `0x10`, ` 5`) is refused. */
export function numberText(from: number, to: number, description: string, whole = false) {
  const error = `must be a ${whole ? 'whole ' : ''}number from ${from} to ${to}`;
  const number = whole ? z.int({ error }) : z.number({ error });
  return z
    .string({ error: `${error}, given once` })
    .refine((text) => /^\d{1,6}(\.\d{1,6})?$/.test(text), { error })
    .transform(Number)
    .pipe(number.min(from).max(to))
    .meta({ type: whole ? 'integer' : 'number', minimum: from, maximum: to, description });
}

const DATE_OR_MOMENT = z.union([z.iso.date(), z.iso.datetime({ offset: true })]);

/** A date, taken as its first moment, or a moment, as ms since 1970. Both in UTC unless an offset says otherwise. */
export function momentText(description: string) {
  const error = 'must be a date like 2026-03-02 or a moment like 2026-03-02T08:00:00Z, given once';
  return z
    .string({ error })
    .refine((text) => DATE_OR_MOMENT.safeParse(text).success, { error })
    .transform((text) => Date.parse(text))
    .meta({ type: 'string', anyOf: [{ format: 'date' }, { format: 'date-time' }], description });
}

/** true or false. */
export function flagText(description: string) {
  return z
    .enum(['true', 'false'], { error: choiceOf(['true', 'false']) })
    .transform((text) => text === 'true')
    .meta({ type: 'boolean', description });
}

/** Names of a closed set, with commas between them. */
export function namesText<const N extends string>(names: readonly N[], description: string) {
  const error = `must be one or more of ${names.join(', ')}, each once, with commas between them`;
  const isListOf = (parts: readonly string[]) =>
    new Set(parts).size === parts.length && parts.every((part) => (names as readonly string[]).includes(part));
  return z
    .string({ error })
    .refine((text) => isListOf(text.split(',')), { error })
    .transform((text) => text.split(',') as N[])
    .meta({ type: 'string', description });
}

export const limitField = numberText(1, 100, 'How many to list. Default 20.', true).optional();

export const DEFAULT_LIMIT = 20;

export const cursorField = z
  .string({ error: 'must be a cursor, given once' })
  .max(200, { error: 'must be `nextCursor` of an earlier page' })
  .optional()
  .describe('`nextCursor` of the page before; absent for the first page.');

export const nextCursorField = z.string().nullable().describe('Where the next page begins; null at the end.');

/** Says in one issue that a cursor was not one of ours. */
export const BAD_CURSOR = [{ path: 'cursor', message: 'must be `nextCursor` of an earlier page, as it was given' }];
