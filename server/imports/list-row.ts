/** One row of a list as its reader gives it: a value to be checked, or what keeps it from being one. */
import type { Issue } from '../schemas/wire-parsing.ts';

/** Rows are numbered as whoever wrote the list sees them: in CSV as a spreadsheet does, the header being 1; in NDJSON by the line; in a JSON array from 1. */
export type ListRow = { readonly row: number } & (
  | { readonly value: unknown; readonly issues?: undefined }
  | { readonly issues: readonly Issue[]; readonly id: string | undefined }
);
