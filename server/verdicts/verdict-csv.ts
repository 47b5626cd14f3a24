/**
 * A page of verdicts as CSV (RFC 4180): one line for each entry a verdict was asked for, or one where there is none. Text that a
 * spreadsheet would run as a formula is defused; numbers are left as they are.
 */
import { stringify } from 'csv-stringify/sync';
import type { VerdictHeading } from '../schemas/verdict-list.ts';

const COLUMNS = [
  'id',
  'createdAt',
  'modelVersion',
  'grade',
  'summary',
  'mainsVoltage_V',
  'mainsFrequency_Hz',
  'count',
  'dimmerId',
  'dimmerRevision',
  'lampId',
  'lampRevision',
  'lampCount',
  'stale',
] as const;

type Line = { readonly [column in (typeof COLUMNS)[number]]: string | number | null };

export function verdictsCsv(headings: readonly VerdictHeading[]): string {
  return csvText(COLUMNS, headings.flatMap(linesOf));
}

export function csvText<C extends string>(
  columns: readonly C[],
  lines: readonly { readonly [column in C]: string | number | null }[],
): string {
  return stringify([...lines], {
    header: true,
    columns: [...columns],
    record_delimiter: 'windows',
    quoted_match: /[\r\n]/,
    cast: { string: defused },
  });
}

/**
 * Spreadsheets take a cell that begins with one of these for a formula, after spaces too; a quote before it makes it text. Only text
 * goes through here: a negative number is a number, and stays one.
 */
export function defused(text: string): string {
  return /^\s*[=+\-@\t\r\n\uff1d\uff0b\uff0d\uff20]/.test(text) ? `'${text}` : text;
}

function linesOf(heading: VerdictHeading): readonly Line[] {
  const { id, createdAt, modelVersion, grade, summary, mains, count, judgedFor } = heading;
  const own = {
    id,
    createdAt,
    modelVersion,
    grade,
    summary,
    mainsVoltage_V: mains.voltage_V,
    mainsFrequency_Hz: mains.frequency_Hz,
    count,
  };
  if (judgedFor.length === 0) {
    return [{ ...own, dimmerId: null, dimmerRevision: null, lampId: null, lampRevision: null, lampCount: null, stale: null }];
  }
  return judgedFor.map(({ count: lampCount, stale, ...entries }) => ({ ...own, ...entries, lampCount, stale: String(stale) }));
}
