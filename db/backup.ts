/**
 * Copies a record into one file while a service uses it. The copy is written under another name, checked against the record, and only
 * then given the name that was asked for; a file of that name is never overwritten.
 */
import { randomUUID } from 'node:crypto';
import { closeSync, existsSync, fsyncSync, linkSync, openSync, renameSync, rmSync } from 'node:fs';
import { basename, dirname, join } from 'node:path';
import Database from 'better-sqlite3';
import { damageOf, openExisting, type RowCounts, rowCounts, tableThatDiffers } from './copy-check.ts';
import type { RecordDatabase } from './record.ts';

export type BackupResult = { readonly ok: true; readonly rows: RowCounts } | { readonly ok: false; readonly problem: string };

/** pages; more than any record has, so that all are copied in one step, which is one moment of the record */
const ALL_PAGES = 0x7fffffff;
/** A record that loses and gains rows in the moment of copying can have been counted wrong; three times in a row it has not. */
const ATTEMPTS = 3;

export async function backUpRecord(recordFile: string, target: string): Promise<BackupResult> {
  if (existsSync(target)) return { ok: false, problem: `${target} exists already. A backup overwrites nothing: name another file.` };
  if (!existsSync(dirname(target))) return { ok: false, problem: `There is no folder ${dirname(target)}.` };
  const opened = openExisting(recordFile);
  if (!opened.ok) return opened;
  const unfinished = join(dirname(target), `.${basename(target)}.${randomUUID()}.unfinished`);
  try {
    let result: BackupResult = { ok: false, problem: 'Nothing was copied.' };
    for (let attempt = 0; attempt < ATTEMPTS && !result.ok; attempt += 1) {
      removeDatabase(unfinished);
      result = await copyAndCheck(opened.record, unfinished);
    }
    if (result.ok) giveName(unfinished, target);
    return result;
  } catch (error) {
    // A record that is damaged fails while it is read; a full disk while the copy is written.
    if (!(error instanceof Database.SqliteError)) throw error;
    return { ok: false, problem: `${recordFile} could not be copied: ${error.message}.` };
  } finally {
    opened.record.close();
    removeDatabase(unfinished);
  }
}

/** Copies all pages at once; what resolves is not taken for done: a copy that finds a lock in its way resolves, and wrote nothing. */
export async function copyDatabase(record: RecordDatabase, target: string): Promise<void> {
  await record.backup(target, { progress: () => ALL_PAGES });
}

async function copyAndCheck(record: RecordDatabase, target: string): Promise<BackupResult> {
  const before = rowCounts(record);
  await copyDatabase(record, target);
  const after = rowCounts(record);
  // Also makes it a file that stands alone: the copy is marked as having a write-ahead log, as the record has.
  const copy = new Database(target);
  try {
    copy.pragma('journal_mode = DELETE');
    const damage = damageOf(copy);
    if (damage !== undefined) return { ok: false, problem: `The copy is not good. ${damage}` };
    const rows = rowCounts(copy);
    const table = tableThatDiffers(rows, before, after);
    if (table === undefined) return { ok: true, rows };
    return {
      ok: false,
      problem: `The copy has ${rows[table] ?? 'no'} rows of ${table}; the record had ${before[table] ?? 'no'} before and ${after[table] ?? 'no'} after.`,
    };
  } finally {
    copy.close();
  }
}

/** Gives a checked copy its name, and returns when that would outlive a power cut. Throws EEXIST where the name was taken meanwhile. */
export function giveName(checked: string, target: string): void {
  syncToDisk(checked);
  try {
    // A link is refused where the name exists; a rename would overwrite.
    linkSync(checked, target);
    rmSync(checked);
  } catch (error) {
    // Some file systems, such as those of memory sticks, have no links.
    if ((error as NodeJS.ErrnoException).code === 'EEXIST' || existsSync(target)) throw error;
    renameSync(checked, target);
  }
  syncToDisk(dirname(target));
}

function syncToDisk(path: string): void {
  const descriptor = openSync(path, 'r');
  try {
    fsyncSync(descriptor);
  } finally {
    closeSync(descriptor);
  }
}

export function removeDatabase(file: string): void {
  for (const suffix of ['', '-journal', '-wal', '-shm']) rmSync(file + suffix, { force: true });
}
