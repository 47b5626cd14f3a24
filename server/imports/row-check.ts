/** Checks one row of a list by the schema of its entries, as PUT would, and makes of it what is staged. */
import { z } from 'zod';
import type { EntryKind } from '../../db/entries.ts';
import type { StagedRow } from '../../db/import-staging.ts';
import { dimmerEntry, entryId, lampEntry } from '../schemas/entry.ts';
import { type Issue, parseWire } from '../schemas/wire-parsing.ts';
import type { ListRow } from './list-row.ts';

const ROWS = {
  dimmer: z.strictObject({ id: entryId('dimmer'), ...dimmerEntry.shape }),
  lamp: z.strictObject({ id: entryId('lamp'), ...lampEntry.shape }),
} as const;

/** A row that is wrong all over is mended by its first few faults as well. */
const MOST_ISSUES = 20;
/** characters; an id that is longer is not one, and is shown cut off */
const SHOWN_ID = 64;

export function checkRow(kind: EntryKind, row: ListRow): StagedRow {
  if (row.issues !== undefined) return refused(row.row, row.id ?? null, row.issues);
  const parsed = parseWire(ROWS[kind], row.value);
  if (!parsed.ok) return refused(row.row, idIn(row.value), parsed.issues);
  const { id, ...entry } = parsed.value;
  return { row: row.row, id, content: JSON.stringify(entry), outcome: null, issues: null };
}

export function refused(row: number, id: string | null, issues: readonly Issue[]): StagedRow {
  const shownId = id === null ? null : id.slice(0, SHOWN_ID);
  return { row, id: shownId, content: null, outcome: 'refused', issues: JSON.stringify(issues.slice(0, MOST_ISSUES)) };
}

function idIn(value: unknown): string | null {
  const id = typeof value === 'object' && value !== null && 'id' in value ? value.id : null;
  return typeof id === 'string' && id !== '' ? id : null;
}
