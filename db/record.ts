/**
 * Opens and closes the SQLite file that holds the record. Every pragma the service relies on is stated here, none is left to the
 * build's default. One writing connection, in the main thread; worker threads hold none.
 */
import { mkdirSync } from 'node:fs';
import { dirname } from 'node:path';
import Database from 'better-sqlite3';
import { migrate } from './migrations.ts';

export type RecordDatabase = Database.Database;

/** "HOLD" in ASCII: marks the file as ours for anyone who runs `file` on it. */
const APPLICATION_ID = 0x484f4c44;

/** Opens the file (creating it and its folder), brings its schema up to date, and refuses a schema newer than this code. */
export function openRecord(file: string, now: () => Date): RecordDatabase {
  mkdirSync(dirname(file), { recursive: true });
  const record = new Database(file);
  try {
    statePragmas(record);
    migrate(record, now);
  } catch (error) {
    record.close();
    throw error;
  }
  return record;
}

function statePragmas(record: RecordDatabase): void {
  // Readers never wait for the writer, and a crash leaves the last whole transaction.
  record.pragma('journal_mode = WAL');
  // With WAL, NORMAL can lose the last transactions on a power cut but never corrupts; a lost verdict is computed again.
  record.pragma('synchronous = NORMAL');
  record.pragma('foreign_keys = ON');
  // ms. Waiting blocks the event loop, so it is short: only another process on the same file can make us wait.
  record.pragma('busy_timeout = 2000');
  // pages (4 KiB each): a checkpoint about every 4 MiB, after which the WAL is cut back to 16 MiB at most
  record.pragma('wal_autocheckpoint = 1000');
  record.pragma('journal_size_limit = 16777216');
  // negative: KiB
  record.pragma('cache_size = -16384');
  record.pragma('mmap_size = 0');
  record.pragma('temp_store = MEMORY');
  // A file from elsewhere cannot make its views and triggers call functions with side effects.
  record.pragma('trusted_schema = OFF');
  record.pragma('cell_size_check = ON');
  record.pragma('recursive_triggers = OFF');
  record.pragma(`application_id = ${APPLICATION_ID}`);
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
