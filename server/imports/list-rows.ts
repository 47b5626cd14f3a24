/** Chooses the reader of a list by the media type that its sender states. */
import type { EntryKind } from '../../db/entries.ts';
import type { DecimalMark } from './csv-numbers.ts';
import { csvRows } from './csv-rows.ts';
import type { ImportLimits } from './import-limits.ts';
import { jsonArrayRows } from './json-array-rows.ts';
import type { ListRow } from './list-row.ts';
import { listText } from './list-text.ts';
import { ndjsonRows } from './ndjson-rows.ts';

export const LIST_TYPES = ['text/csv', 'application/x-ndjson', 'application/json'] as const;
export type ListType = (typeof LIST_TYPES)[number];

export interface SentList {
  readonly type: ListType;
  readonly charset: string | undefined;
  readonly bytes: AsyncIterable<Uint8Array>;
}

export function listRows(
  { type, charset, bytes }: SentList,
  kind: EntryKind,
  limits: ImportLimits,
  decimal: DecimalMark | undefined,
): AsyncGenerator<ListRow> {
  const text = listText(bytes, charset, limits.bytes);
  switch (type) {
    case 'text/csv':
      return csvRows(text, kind, limits, decimal);
    case 'application/x-ndjson':
      return ndjsonRows(text, limits);
    case 'application/json':
      return jsonArrayRows(text, limits);
  }
}
