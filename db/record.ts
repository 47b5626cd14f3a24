/**
 * Opens and closes the SQLite file that holds the record. Every pragma the service relies on is stated here, none is left to the
 * build's default. One writing connection, in the main thread; worker threads hold none.
 */
import { mkdirSync } from 'node:fs';
import { dirname } from 'node:path';
import Database from 'better-sqlite3';
import { migrate } from './migrations.ts';

export type RecordDatabase = Database.Database;

/** "HOLD" in ASCII: marks the file as ours, for this code and for anyone who runs `file` on it. */
export const APPLICATION_ID = 0x484f4c44;
/** "REST" in ASCII: restore.ts has begun to replace what the file holds, and has not finished. */
export const RESTORING_ID = 0x52455354;

/** Opens the file (creating it and its folder), brings its schema up to date, and refuses a schema newer than this code. */
export function openRecord(file: string, now: () => Date): RecordDatabase {
  const record = openFile(file);
  try {
    // Before the first pragma, so that a file of something else is not turned into one with a write-ahead log.
    refuseOtherContents(record);
    statePragmas(record);
    // And again now that this connection holds the file: a restore that began in between is seen, and none can begin from here on.
    refuseOtherContents(record);
    record.pragma(`application_id = ${APPLICATION_ID}`);
    migrate(record, now);
  } catch (error) {
    record.close();
    throw error instanceof Database.SqliteError ? cannotOpen(file, error) : error;
  }
  return record;
}

function openFile(file: string): RecordDatabase {
  try {
    mkdirSync(dirname(file), { recursive: true });
    return new Database(file);
  } catch (error) {
    throw cannotOpen(file, error);
  }
}

/** SQLite and the system say what is wrong, and not always with which file. */
function cannotOpen(file: string, cause: unknown): Error {
  return new Error(`The record ${file} cannot be opened: ${cause instanceof Error ? cause.message : cause}.`, { cause });
}

function statePragmas(record: RecordDatabase): void {
  // Of a new record; an older one keeps its own. Evidence of 2 KiB leaves a quarter of a 4 KiB page unused: at 16 KiB the whole file is
  // 22 % smaller (npm run bench:evidence).
  record.pragma('page_size = 16384');
  // Readers never wait for the writer, and a crash leaves the last whole transaction.
  record.pragma('journal_mode = WAL');
  // With WAL, NORMAL can lose the last transactions on a power cut but never corrupts; a lost verdict is computed again.
  record.pragma('synchronous = NORMAL');
  record.pragma('foreign_keys = ON');
  // ms. Waiting blocks the event loop, so it is short: only another process on the same file can make us wait.
  record.pragma('busy_timeout = 2000');
  // pages (16 KiB each): a checkpoint about every 8 MiB, after which the WAL is cut back to 16 MiB at most
  record.pragma('wal_autocheckpoint = 500');
  record.pragma('journal_size_limit = 16777216');
  // negative: KiB
  record.pragma('cache_size = -16384');
  record.pragma('mmap_size = 0');
  record.pragma('temp_store = MEMORY');
  // A file from elsewhere cannot make its views and triggers call functions with side effects.
  record.pragma('trusted_schema = OFF');
  record.pragma('cell_size_check = ON');
  record.pragma('recursive_triggers = OFF');
}

function refuseOtherContents(record: RecordDatabase): void {
  const id = record.pragma('application_id', { simple: true });
  if (id === APPLICATION_ID) return;
  if (id === RESTORING_ID) throw new Error(`${record.name} is being restored, or a restore broke off: run \`npm run restore\` again.`);
  if (id !== 0 || !isEmpty(record)) throw new Error(`${record.name} is an SQLite file of something else, not a record of Holdfast.`);
}

export function isEmpty(record: RecordDatabase): boolean {
  return record.prepare('SELECT count(*) FROM sqlite_schema').pluck().get() === 0;
}

/** Whether the record answers a read. */
export function isRecordReadable(record: RecordDatabase): boolean {
  try {
    return record.open && record.prepare('SELECT count(*) FROM migrations').pluck().get() !== undefined;
  } catch {
    return false;
  }
}

/** Moves the write-ahead log into the file and closes it, so that the file alone is a whole copy. */
export function closeRecord(record: RecordDatabase): void {
  if (!record.open) return;
  record.pragma('wal_checkpoint(TRUNCATE)');
  record.close();
}
