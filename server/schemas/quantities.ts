/**
 * The building blocks of the wire schemas: numbers with a unit and a documented range, choices, and rules across fields. Each brings
 * the text that the OpenAPI document shows and the message that says what would be right.
 */
import { z } from 'zod';
import { type Default, defaultText } from '../verdicts/pairing-defaults.ts';

export type Unit = 'V' | 'A' | 'mA' | 'W' | 'Ohm' | 'kOhm' | 'nF' | 'uF' | 'mH' | 'us' | 'Hz' | 'deg' | '%';

/** What a field is, in words, and what it is when it is not given. */
interface Told {
  readonly is: string;
  readonly otherwise?: Default<unknown> | string;
}

function text({ is, otherwise }: Told, range = ''): string {
  const fallback = otherwise === undefined ? '' : typeof otherwise === 'string' ? ` ${otherwise}` : ` ${defaultText(otherwise)}`;
  return `${is}.${range === '' ? '' : ` ${range}.`}${fallback}`;
}

/** A number from..to, both included. A number that JSON cannot hold (1e999 reads as infinite) is refused like any other outside. */
export function quantity(unit: Unit, from: number, to: number, told: Told) {
  const error = `must be a number from ${from} to ${to} (${unit})`;
  return z
    .number({ error })
    .min(from)
    .max(to)
    .describe(text(told, `${from} to ${to} ${unit}`));
}

/** A quantity whose part can be absent. */
export function quantityOrNull(unit: Unit, from: number, to: number, told: Told) {
  const error = `must be a number from ${from} to ${to} (${unit}), or null`;
  return z
    .number({ error })
    .min(from)
    .max(to)
    .nullable()
    .describe(text(told, `${from} to ${to} ${unit}, or null`));
}

export function wholeNumber(from: number, to: number, told: Told) {
  const error = `must be a whole number from ${from} to ${to}`;
  return z
    .int({ error })
    .min(from)
    .max(to)
    .describe(text(told, `${from} to ${to}`));
}

export function choice<const V extends readonly [string, ...string[]]>(values: V, told: Told) {
  return z.enum(values, { error: `must be one of ${values.map((value) => JSON.stringify(value)).join(', ')}` }).describe(text(told));
}

export function list<S extends z.ZodType>(item: S, from: number, to: number, what: string, is: string) {
  const error = `must be a list of ${from} to ${to} ${what}`;
  return z.array(item, { error }).min(from).max(to).describe(`${is}. ${from} to ${to} ${what}.`);
}

export type Report = (path: readonly (string | number)[], message: string) => void;

/**
 * Adds a rule across fields. It runs even where a field of its own is wrong already, so that one answer lists everything; it
 * therefore reads what it needs with `numberAt` and keeps silent where that is not there.
 */
export function withRule<S extends z.ZodType>(schema: S, rule: (sent: unknown, report: Report) => void): S {
  return schema.superRefine(
    (sent, context) => rule(sent, (path, message) => context.addIssue({ code: 'custom', path: [...path], message })),
    {
      when: ({ value }) => typeof value === 'object' && value !== null,
    },
  );
}

export function valueAt(sent: unknown, ...path: readonly (string | number)[]): unknown {
  return path.reduce<unknown>(
    (value, part) => (typeof value === 'object' && value !== null ? (value as Record<string | number, unknown>)[part] : undefined),
    sent,
  );
}

export function numberAt(sent: unknown, ...path: readonly (string | number)[]): number | undefined {
  const value = valueAt(sent, ...path);
  return typeof value === 'number' && Number.isFinite(value) ? value : undefined;
}

/** Reports every place where a column of a table does not rise. */
export function reportNotRising(table: unknown, column: readonly string[], unit: Unit, report: Report): void {
  if (!Array.isArray(table)) return;
  for (let index = 1; index < table.length; index += 1) {
    const before = numberAt(table, index - 1, ...column);
    const value = numberAt(table, index, ...column);
    if (before !== undefined && value !== undefined && value <= before) {
      report([index, ...column], `must be above the one before it (${before} ${unit}): the list is sorted, rising, without repeats`);
    }
  }
}
