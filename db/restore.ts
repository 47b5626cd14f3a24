/**
 * Puts the contents of a backup in the place of a record, where no process has that record open; the replaced record is kept beside it.
 *
 * Who has it open is asked of SQLite. Every connection to a record with a write-ahead log holds a shared lock on it for as long as it
 * is open, and the kernel drops the lock when its process dies, however it dies. To hold the file exclusively is to know that nobody
 * has it. The steps:
 *   1. check the backup;
 *   2. hold the record exclusively, which fails while anybody has it open;
 *   3. copy it beside itself, mark it as being restored, let go: from here on openRecord refuses it;
 *   4. write the backup over it, in one transaction, which replaces the mark as well;
 *   5. check the result against the backup.
 * Broken off before 3 ends, nothing has happened; between 3 and 4 the mark says so, and the restore is run again.
 */
import { existsSync, mkdirSync, realpathSync } from 'node:fs';
import { dirname } from 'node:path';
import Database from 'better-sqlite3';
import { copyDatabase, giveName, removeDatabase } from './backup.ts';
import { damageOf, openExisting, type RowCounts, rowCounts, tableThatDiffers } from './copy-check.ts';
import { APPLICATION_ID, isEmpty, RESTORING_ID, type RecordDatabase } from './record.ts';

export type RestoreResult =
  | {
      readonly ok: true;
      readonly rows: RowCounts;
      /** where the replaced record is kept; undefined where there was none */
      readonly replaced: string | undefined;
    }
  | { readonly ok: false; readonly problem: string };

type Taken = { readonly ok: true; readonly replaced: string | undefined } | { readonly ok: false; readonly problem: string };

export async function restoreRecord(backup: string, recordFile: string, now: () => Date): Promise<RestoreResult> {
  const opened = openExisting(backup);
  if (!opened.ok) return opened;
  const source = opened.record;
  try {
    if (existsSync(recordFile) && realpathSync(backup) === realpathSync(recordFile)) {
      return { ok: false, problem: `${backup} is the record itself.` };
    }
    const damage = damageOf(source);
    if (damage !== undefined) return { ok: false, problem: `${backup} is not restored. ${damage}` };
    const taken = await takeRecord(recordFile, now);
    if (!taken.ok) return taken;
    await copyDatabase(source, recordFile);
    return checkRestored(recordFile, rowCounts(source), taken.replaced);
  } finally {
    source.close();
  }
}

/** Steps 2 and 3. */
async function takeRecord(recordFile: string, now: () => Date): Promise<Taken> {
  mkdirSync(dirname(recordFile), { recursive: true });
  let record: RecordDatabase | undefined;
  try {
    record = new Database(recordFile, { timeout: 0 });
    record.pragma('locking_mode = EXCLUSIVE');
    // Needs the file exclusively. It also leaves no write-ahead log that could outlive what it belongs to.
    record.pragma('journal_mode = DELETE');
    record.exec('BEGIN EXCLUSIVE; COMMIT');
    const id = record.pragma('application_id', { simple: true });
    const empty = isEmpty(record);
    if (id !== APPLICATION_ID && id !== RESTORING_ID && !(id === 0 && empty)) {
      return { ok: false, problem: `${recordFile} is an SQLite file of something else. Nothing was changed.` };
    }
    const replaced = empty ? undefined : await keepBeside(record, recordFile, now());
    record.pragma(`application_id = ${RESTORING_ID}`);
    return { ok: true, replaced };
  } catch (error) {
    if (!(error instanceof Database.SqliteError)) throw error;
    if (error.code.startsWith('SQLITE_BUSY') || error.code.startsWith('SQLITE_LOCKED')) {
      return { ok: false, problem: `A process has ${recordFile} open. Stop the service, then restore. Nothing was changed.` };
    }
    return { ok: false, problem: `${recordFile} cannot be replaced as it is (${error.message}). Move it away, then restore.` };
  } finally {
    record?.close();
  }
}

/** Damaged or not: it is kept as it is. */
async function keepBeside(record: RecordDatabase, recordFile: string, at: Date): Promise<string> {
  const replaced = `${recordFile}.replaced-${at.toISOString().replaceAll(/[-:.]/g, '')}`;
  const unfinished = `${replaced}.unfinished`;
  try {
    removeDatabase(unfinished);
    await copyDatabase(record, unfinished);
    const copy = new Database(unfinished);
    try {
      const [pages, copied] = [record, copy].map((database) => database.pragma('page_count', { simple: true }));
      if (pages !== copied) throw new Error(`Only ${copied} of ${pages} pages of ${recordFile} could be kept. Nothing was changed.`);
      // It may carry the mark of a restore that broke off.
      copy.pragma(`application_id = ${APPLICATION_ID}`);
    } finally {
      copy.close();
    }
    giveName(unfinished, replaced);
    return replaced;
  } finally {
    removeDatabase(unfinished);
  }
}

function checkRestored(recordFile: string, wanted: RowCounts, replaced: string | undefined): RestoreResult {
  const kept = replaced === undefined ? '' : ` What was there is in ${replaced}.`;
  const opened = openExisting(recordFile);
  if (!opened.ok) return { ok: false, problem: `The backup could not be written.${kept} ${opened.problem}` };
  try {
    const rows = rowCounts(opened.record);
    const fault = damageOf(opened.record) ?? tableThatDiffers(rows, wanted, wanted);
    if (fault !== undefined) return { ok: false, problem: `The backup was not written whole (${fault}).${kept} Run the restore again.` };
    return { ok: true, rows, replaced };
  } finally {
    opened.record.close();
  }
}
