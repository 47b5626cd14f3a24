/** One row of a list as its reader gives it: a value to be checked, or what keeps it from being one. */
import { repeatedFields } from '../json/repeated-fields.ts';
import type { Issue } from '../schemas/wire-parsing.ts';

/** Rows are numbered as whoever wrote the list sees them: in CSV as a spreadsheet does, the header being 1; in NDJSON by the line; in a JSON array from 1. */
export type ListRow = { readonly row: number } & (
  | { readonly value: unknown; readonly issues?: undefined }
  | { readonly issues: readonly Issue[]; readonly id: string | undefined }
);

/** The row that a JSON text makes. A field that is given twice keeps it from being a value: which was meant is not guessed. */
export function rowOfJson(text: string, row: number): ListRow {
  const value: unknown = JSON.parse(text);
  const repeated = repeatedFields(text);
  return repeated.length > 0 ? { row, issues: repeated, id: undefined } : { row, value };
}
