/**
 * The statements over lists on their way into the catalogue: stage rows, take them for applying, note what became of them, forget them.
 * What is in an entry, and when a list may be applied, is the server's.
 */
import type { EntryKind, PutOutcome } from './entries.ts';
import type { RecordDatabase } from './record.ts';

export interface StagedRow {
  readonly row: number;
  readonly id: string | null;
  /** JSON of the checked entry; null where refused */
  readonly content: string | null;
  readonly outcome: PutOutcome | 'refused' | null;
  /** JSON of [{path, message}]; null where not refused */
  readonly issues: string | null;
}

export interface UnfinishedImport {
  readonly id: number;
  readonly kind: EntryKind;
}

export interface ImportStaging {
  begin(kind: EntryKind, at: string): number;
  /** The first staged row of the import with this entry id. */
  rowWithEntry(importId: number, id: string): number | undefined;
  /** Inside a transaction, many at a time. */
  stage(importId: number, row: StagedRow): void;
  /** From here on the import is finished whatever happens. */
  decide(importId: number): void;
  /** Rows after `after` that are still to be applied, in order. */
  toApply(importId: number, after: number, limit: number): readonly StagedRow[];
  /** Inside the transaction that applies the row. */
  note(importId: number, row: number, outcome: PutOutcome): void;
  /** Rows after `after` in order, whatever became of them. */
  rows(importId: number, after: number, limit: number): readonly StagedRow[];
  /** Deletes up to `limit` rows, or the import where none are left; says whether it is gone. */
  forgetSome(importId: number, limit: number): boolean;
  unfinished(state: 'arriving' | 'applying'): readonly UnfinishedImport[];
}

export function importStaging(record: RecordDatabase): ImportStaging {
  const insertImport = record.prepare("INSERT INTO imports (kind, state, begun_at) VALUES (?, 'arriving', ?)");
  const rowOfEntry = record
    .prepare<[number, string], number>('SELECT row FROM import_rows WHERE import = ? AND id = ? ORDER BY seq')
    .pluck();
  const insertRow = record.prepare(
    'INSERT INTO import_rows (import, row, id, content, outcome, issues) VALUES (@importId, @row, @id, @content, @outcome, @issues)',
  );
  const setApplying = record.prepare("UPDATE imports SET state = 'applying' WHERE id = ?");
  const columns = 'row, id, content, outcome, issues';
  const unapplied = record.prepare<[number, number, number], StagedRow>(
    `SELECT ${columns} FROM import_rows WHERE import = ? AND row > ? AND outcome IS NULL ORDER BY row LIMIT ?`,
  );
  const noteOutcome = record.prepare('UPDATE import_rows SET outcome = ?, content = NULL WHERE import = ? AND row = ?');
  const following = record.prepare<[number, number, number], StagedRow>(
    `SELECT ${columns} FROM import_rows WHERE import = ? AND row > ? ORDER BY row LIMIT ?`,
  );
  const deleteRows = record.prepare('DELETE FROM import_rows WHERE seq IN (SELECT seq FROM import_rows WHERE import = ? LIMIT ?)');
  const deleteImport = record.prepare('DELETE FROM imports WHERE id = ?');
  const inState = record.prepare<[string], UnfinishedImport>('SELECT id, kind FROM imports WHERE state = ? ORDER BY id');

  const forgetSome = record.transaction((importId: number, limit: number) => {
    if (deleteRows.run(importId, limit).changes > 0) return false;
    deleteImport.run(importId);
    return true;
  });

  return {
    begin: (kind, at) => Number(insertImport.run(kind, at).lastInsertRowid),
    rowWithEntry: (importId, id) => rowOfEntry.get(importId, id),
    stage: (importId, row) => void insertRow.run({ importId, ...row }),
    decide: (importId) => void setApplying.run(importId),
    toApply: (importId, after, limit) => unapplied.all(importId, after, limit),
    note: (importId, row, outcome) => void noteOutcome.run(outcome, importId, row),
    rows: (importId, after, limit) => following.all(importId, after, limit),
    forgetSome: (importId, limit) => forgetSome.immediate(importId, limit),
    unfinished: (state) => inState.all(state),
  };
}
