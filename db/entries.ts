/**
 * The statements over the catalogue's entries and their revisions: read, put, delete. Searching them is entry-search.ts. Content goes
 * in and out as canonical JSON; what is in it is the server's.
 */
import { createHash } from 'node:crypto';
import { findability } from './entry-findability.ts';
import { judgedPairs } from './judged-pairs.ts';
import type { RecordDatabase } from './record.ts';

export type EntryKind = 'dimmer' | 'lamp';

/** One revision of an entry. */
export interface EntryRow {
  readonly kind: EntryKind;
  readonly id: string;
  readonly revision: number;
  readonly content: string;
  /** of the entry */
  readonly created_at: string;
  /** of this revision */
  readonly revised_at: string;
}

/** An entry to be written: its content, and what is found by. */
export interface EntryWrite {
  readonly kind: EntryKind;
  readonly id: string;
  /** canonical JSON of the whole entry */
  readonly content: string;
  /** canonical JSON of what a verdict rests on: content without the text */
  readonly circuit: string;
  readonly name: string | null;
  readonly articleNumber: string | null;
  /** W */
  readonly ratedPower: number | null;
  readonly tags: readonly string[];
  /** of the name, folded */
  readonly words: readonly string[];
}

/** Where an entry stands in the record; other tables refer to it by `seq`. */
export interface EntryPlace {
  readonly seq: number;
  readonly revision: number;
  readonly circuit: number | null;
}

export type PutOutcome = 'created' | 'revised' | 'unchanged';

export interface EntryStore {
  /** Runs `act` as one immediate transaction: all of it is stored or nothing. May be nested. */
  together<T>(act: () => T): T;
  /** Whether the entry exists and is not deleted. */
  has(kind: EntryKind, id: string): boolean;
  /** The latest revision; undefined where there is none or it was deleted. */
  find(kind: EntryKind, id: string): EntryRow | undefined;
  /** A given revision, also of a deleted entry. */
  findRevision(kind: EntryKind, id: string, revision: number): EntryRow | undefined;
  /** Writes a new revision, unless the content is that of the latest. Inside `together`, with whatever it was decided by. */
  put(write: EntryWrite, at: string): { readonly row: EntryRow; readonly outcome: PutOutcome };
  /** Whether there was something to delete. Inside `together`. */
  delete(kind: EntryKind, id: string, at: string): boolean;
}

const ROW = 'e.kind, e.id, r.revision, r.content, e.created_at, r.revised_at';

interface Found extends EntryRow, EntryPlace {}

export function entryStore(record: RecordDatabase): EntryStore {
  const present = record.prepare<[string, string], Found>(
    `SELECT e.seq, e.circuit, ${ROW} FROM entries e JOIN revisions r ON r.entry = e.seq AND r.revision = e.revision
     WHERE e.kind = ? AND e.id = ? AND e.deleted_at IS NULL`,
  );
  const isPresent = record
    .prepare<[string, string], number>('SELECT 1 FROM entries WHERE kind = ? AND id = ? AND deleted_at IS NULL')
    .pluck();
  const ofRevision = record.prepare<[string, string, number], EntryRow>(
    `SELECT ${ROW} FROM entries e JOIN revisions r ON r.entry = e.seq WHERE e.kind = ? AND e.id = ? AND r.revision = ?`,
  );
  const place = record.prepare<[string, string], EntryPlace>('SELECT seq, revision, circuit FROM entries WHERE kind = ? AND id = ?');
  const sameCircuit = record
    .prepare<[number, Buffer], number>('SELECT circuit FROM revisions WHERE entry = ? AND circuit_sha256 = ? LIMIT 1')
    .pluck();
  const insertEntry = record.prepare(
    `INSERT INTO entries (kind, id, revision, circuit, name, article_number, rated_power, created_at, revised_at)
     VALUES (@kind, @id, 1, 1, @name, @articleNumber, @ratedPower, @at, @at)`,
  );
  const updateEntry = record.prepare(
    `UPDATE entries SET revision = @revision, circuit = @circuit, name = @name, article_number = @articleNumber,
     rated_power = @ratedPower, revised_at = @at, deleted_at = NULL WHERE seq = @seq`,
  );
  const insertRevision = record.prepare(
    `INSERT INTO revisions (entry, revision, circuit, circuit_sha256, content, revised_at)
     VALUES (@seq, @revision, @circuit, @sha256, @content, @at)`,
  );
  const markDeleted = record.prepare('UPDATE entries SET deleted_at = ?, circuit = NULL WHERE seq = ?');
  const search = findability(record);
  const pairs = judgedPairs(record);

  const appendRevision = (write: EntryWrite, at: string): void => {
    const { kind, id, content, name, articleNumber, ratedPower } = write;
    const sha256 = createHash('sha256').update(write.circuit).digest();
    const known = place.get(kind, id);
    if (known === undefined) {
      const seq = insertEntry.run({ kind, id, name, articleNumber, ratedPower, at }).lastInsertRowid;
      insertRevision.run({ seq, revision: 1, circuit: 1, sha256, content, at });
      return;
    }
    const revision = known.revision + 1;
    const circuit = sameCircuit.get(known.seq, sha256) ?? revision;
    updateEntry.run({ seq: known.seq, revision, circuit, name, articleNumber, ratedPower, at });
    insertRevision.run({ seq: known.seq, revision, circuit, sha256, content, at });
    if (circuit !== known.circuit) pairs.markStale(known.seq, circuit !== revision);
  };

  return {
    together: (act) => record.transaction(act).immediate(),
    has: (kind, id) => isPresent.get(kind, id) !== undefined,
    find: (kind, id) => rowOf(present.get(kind, id)),
    findRevision: (kind, id, revision) => ofRevision.get(kind, id, revision),
    put: (write, at) => {
      const { kind, id } = write;
      const before = present.get(kind, id);
      if (before?.content === write.content) return { row: rowOf(before), outcome: 'unchanged' };
      if (before !== undefined) search.forget(kind, id);
      appendRevision(write, at);
      search.remember(write);
      const row = rowOf(present.get(kind, id));
      if (row === undefined) throw new Error(`The ${kind} ${id} was put and not found.`);
      return { row, outcome: before === undefined ? 'created' : 'revised' };
    },
    delete: (kind, id, at) => {
      const before = present.get(kind, id);
      if (before === undefined) return false;
      search.forget(kind, id);
      markDeleted.run(at, before.seq);
      pairs.markStale(before.seq, false);
      return true;
    },
  };
}

function rowOf(found: Found): EntryRow;
function rowOf(found: Found | undefined): EntryRow | undefined;
function rowOf(found: Found | undefined): EntryRow | undefined {
  if (found === undefined) return undefined;
  const { kind, id, revision, content, created_at, revised_at } = found;
  return { kind, id, revision, content, created_at, revised_at };
}
