/**
 * What a screening selects from the catalogue: frozen as entry and revision at consecutive places, so that later edits change nothing,
 * and read back by ranges of places. A listed screening also has its pairings here.
 */
import type { EntryKind } from './entries.ts';
import type { RecordDatabase } from './record.ts';

export interface SelectedEntry {
  readonly place: number;
  readonly id: string;
  /** of the entry and its revision in the record */
  readonly entry: number;
  readonly revision: number;
  readonly circuit: number;
  /** canonical JSON of the catalogue entry */
  readonly content: string;
}

export interface ListedPair {
  readonly position: number;
  /** places in the selection */
  readonly lamp: number;
  readonly dimmer: number;
  readonly count: number;
}

export interface ScreeningSelection {
  /** Empties the selection, to be frozen anew. */
  clear(screening: number): void;
  /** Each gives how many entries it added, after those of the kind that are there. */
  addAll(screening: number, kind: EntryKind): number;
  addTagged(screening: number, kind: EntryKind, tag: string): number;
  /** In the order given; ids that the catalogue does not hold are left out. */
  addIds(screening: number, kind: EntryKind, ids: readonly string[]): number;
  /** Which of the ids the catalogue does not hold, by their index. */
  missing(kind: EntryKind, ids: readonly string[]): readonly number[];
  entries(screening: number, kind: EntryKind, from: number, to: number): readonly SelectedEntry[];
  pairs(screening: number, from: number, to: number): readonly ListedPair[];
}

export function screeningSelection(record: RecordDatabase): ScreeningSelection {
  const insertInto = 'INSERT INTO screening_entries (screening, kind, place, entry, revision)';
  const nextPlace = '(SELECT count(*) FROM screening_entries WHERE screening = @screening AND kind = @kind)';
  const all = record.prepare(
    `${insertInto} SELECT @screening, @kind, ${nextPlace} + row_number() OVER (ORDER BY id) - 1, seq, revision
     FROM entries WHERE kind = @kind AND deleted_at IS NULL`,
  );
  const tagged = record.prepare(
    `${insertInto} SELECT @screening, @kind, ${nextPlace} + row_number() OVER (ORDER BY e.id) - 1, e.seq, e.revision
     FROM entry_tags t JOIN entries e ON e.kind = t.kind AND e.id = t.id
     WHERE t.kind = @kind AND t.tag = @tag AND e.deleted_at IS NULL`,
  );
  const byIds = record.prepare(
    `${insertInto} SELECT @screening, @kind, ${nextPlace} + row_number() OVER (ORDER BY j.key) - 1, e.seq, e.revision
     FROM json_each(@ids) j JOIN entries e ON e.kind = @kind AND e.id = j.value AND e.deleted_at IS NULL`,
  );
  const missing = record
    .prepare<[object], number>(
      `SELECT j.key FROM json_each(@ids) j
       WHERE NOT EXISTS (SELECT 1 FROM entries e WHERE e.kind = @kind AND e.id = j.value AND e.deleted_at IS NULL) ORDER BY j.key`,
    )
    .pluck();
  const entries = record.prepare<[number, string, number, number], SelectedEntry>(
    `SELECT s.place, e.id, s.entry, s.revision, r.circuit, r.content FROM screening_entries s
     JOIN entries e ON e.seq = s.entry JOIN revisions r ON r.entry = s.entry AND r.revision = s.revision
     WHERE s.screening = ? AND s.kind = ? AND s.place >= ? AND s.place < ? ORDER BY s.place`,
  );
  const pairs = record.prepare<[number, number, number], ListedPair>(
    'SELECT position, lamp, dimmer, count FROM screening_pairs WHERE screening = ? AND position >= ? AND position < ? ORDER BY position',
  );
  const clearEntries = record.prepare('DELETE FROM screening_entries WHERE screening = ?');
  const clearPairs = record.prepare('DELETE FROM screening_pairs WHERE screening = ?');

  return {
    clear: (screening) => {
      clearEntries.run(screening);
      clearPairs.run(screening);
    },
    addAll: (screening, kind) => all.run({ screening, kind }).changes,
    addTagged: (screening, kind, tag) => tagged.run({ screening, kind, tag }).changes,
    addIds: (screening, kind, ids) => byIds.run({ screening, kind, ids: JSON.stringify(ids) }).changes,
    missing: (kind, ids) => missing.all({ kind, ids: JSON.stringify(ids) }),
    entries: (screening, kind, from, to) => entries.all(screening, kind, from, to),
    pairs: (screening, from, to) => pairs.all(screening, from, to),
  };
}
