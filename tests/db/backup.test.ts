import { existsSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import Database from 'better-sqlite3';
import { describe, expect, it, onTestFinished } from 'vitest';
import { backUpRecord } from '../../db/backup.ts';
import { tableThatDiffers } from '../../db/copy-check.ts';
import { closeRecord, openRecord, type RecordDatabase } from '../../db/record.ts';
import { restoreRecord } from '../../db/restore.ts';
import { FIXED_NOW, temporaryFolder } from '../support/server-temporary-record.ts';

const now = () => FIXED_NOW;

interface Place {
  readonly folder: string;
  readonly file: string;
  readonly backup: string;
}

function place(): Place {
  const folder = temporaryFolder();
  return { folder, file: join(folder, 'holdfast.sqlite'), backup: join(folder, 'backup.sqlite') };
}

function open(file: string): RecordDatabase {
  const record = openRecord(file, now);
  onTestFinished(() => closeRecord(record));
  return record;
}

/** A table of the test's own, so that nothing here depends on what the record's tables look like. */
function write(record: RecordDatabase, ...rows: readonly number[]): void {
  record.exec('CREATE TABLE IF NOT EXISTS rooms (number INTEGER PRIMARY KEY) STRICT');
  for (const row of rows) record.prepare('INSERT INTO rooms VALUES (?)').run(row);
}

function roomsIn(file: string): unknown[] {
  const database = new Database(file);
  try {
    return database.prepare('SELECT number FROM rooms ORDER BY number').pluck().all();
  } finally {
    database.close();
  }
}

async function backedUp({ file, backup }: Place, ...rows: readonly number[]): Promise<void> {
  const record = openRecord(file, now);
  write(record, ...rows);
  expect(await backUpRecord(file, backup)).toMatchObject({ ok: true, rows: { rooms: rows.length } });
  closeRecord(record);
}

describe('a backup', () => {
  it('holds what was committed, also what is still in the write-ahead log, and stands in one file', async () => {
    const { folder, file, backup } = place();
    const record = open(file);
    write(record, 1, 2, 3);
    expect(existsSync(`${file}-wal`)).toBe(true);
    expect(await backUpRecord(file, backup)).toEqual({ ok: true, rows: expect.objectContaining({ rooms: 3, verdicts: 0 }) });
    expect(roomsIn(backup)).toEqual([1, 2, 3]);
    expect(readdirSync(folder).filter((name) => name.includes('backup'))).toEqual(['backup.sqlite']);
  });

  it('leaves out what a transaction has not committed', async () => {
    const { file, backup } = place();
    const record = open(file);
    write(record, 1);
    record.exec('BEGIN IMMEDIATE; INSERT INTO rooms VALUES (2)');
    expect(await backUpRecord(file, backup)).toMatchObject({ ok: true, rows: { rooms: 1 } });
    record.exec('COMMIT');
    expect(roomsIn(backup)).toEqual([1]);
  });

  it('overwrites nothing, and leaves nothing behind where it refuses', async () => {
    const { folder, file, backup } = place();
    write(open(file), 1);
    writeFileSync(backup, 'the accounts of the guest house');
    expect(await backUpRecord(file, backup)).toEqual({ ok: false, problem: expect.stringMatching(/backup\.sqlite exists already/) });
    expect(readFileSync(backup, 'utf8')).toBe('the accounts of the guest house');
    expect(readdirSync(folder).filter((name) => name.includes('unfinished'))).toEqual([]);
  });

  it.each([
    ['there is no record', () => undefined, /There is no file/],
    ['the record is not one', (file: string) => writeFileSync(file, 'x'.repeat(5000)), /file is not a database/],
    ['the file is a database of something else', otherDatabase, /of something else/],
  ])('is refused where %s', async (_, prepare, says) => {
    const { file, backup } = place();
    prepare(file);
    expect(await backUpRecord(file, backup)).toEqual({ ok: false, problem: expect.stringMatching(says) });
    expect(existsSync(backup)).toBe(false);
  });

  it('is refused where the record is damaged: a bad copy never gets the name of a backup', async () => {
    const { folder, file, backup } = place();
    damagedRecord(file);
    expect(await backUpRecord(file, backup)).toEqual({ ok: false, problem: expect.stringMatching(/damaged|malformed/) });
    expect(readdirSync(folder)).toEqual(['holdfast.sqlite']);
  });
});

function otherDatabase(file: string): void {
  const other = new Database(file);
  other.exec('CREATE TABLE accounts (x INTEGER)');
  other.close();
}

/** Overwrites the leaf pages of a table in the file, not its head: it opens, and a scan finds it broken. */
function damagedRecord(file: string): void {
  const record = openRecord(file, now);
  record.exec('CREATE TABLE notes (text TEXT) STRICT');
  for (let row = 0; row < 400; row += 1) record.prepare('INSERT INTO notes VALUES (?)').run('n'.repeat(200));
  closeRecord(record);
  const bytes = readFileSync(file);
  bytes.fill(0xa5, bytes.length - 3 * 4096);
  writeFileSync(file, bytes);
}

describe('the row counts of a copy', () => {
  it.each([
    ['are right where nothing changed', { a: 1 }, { a: 1 }, { a: 1 }, undefined],
    ['are right anywhere between before and after', { a: 5 }, { a: 3 }, { a: 7 }, undefined],
    ['are wrong outside of that', { a: 8 }, { a: 3 }, { a: 7 }, 'a'],
    ['are wrong where a table is missing', {}, { a: 0 }, { a: 0 }, 'a'],
    ['are wrong where a table is too many', { a: 1, b: 1 }, { a: 1 }, { a: 1 }, 'b'],
  ])('%s', (_, copy, before, after, table) => {
    expect(tableThatDiffers(copy as Record<string, number>, before, after)).toBe(table);
  });
});

describe('a restore', () => {
  it('brings the backup back and keeps what it replaced beside it', async () => {
    const at = place();
    await backedUp(at, 1, 2);
    const record = openRecord(at.file, now);
    write(record, 3);
    closeRecord(record);
    const replaced = `${at.file}.replaced-20260302T080000000Z`;
    expect(await restoreRecord(at.backup, at.file, now)).toEqual({ ok: true, rows: expect.objectContaining({ rooms: 2 }), replaced });
    expect(roomsIn(at.file)).toEqual([1, 2]);
    expect(roomsIn(replaced)).toEqual([1, 2, 3]);
    expect(readdirSync(at.folder).sort()).toEqual(['backup.sqlite', 'holdfast.sqlite', 'holdfast.sqlite.replaced-20260302T080000000Z']);
    expect(open(at.file).prepare('SELECT count(*) FROM rooms').pluck().get()).toBe(2);
  });

  it('makes the record where there is none', async () => {
    const at = place();
    await backedUp(at, 1);
    const file = join(at.folder, 'new', 'holdfast.sqlite');
    expect(await restoreRecord(at.backup, file, now)).toMatchObject({ ok: true, replaced: undefined });
    expect(roomsIn(file)).toEqual([1]);
  });

  it('takes back a record that was killed before it could put its log into the file', async () => {
    const at = place();
    await backedUp(at, 1);
    const record = openRecord(at.file, now);
    write(record, 2);
    // What a killed process leaves: the file and its log, and no lock.
    const killed = join(at.folder, 'killed.sqlite');
    for (const suffix of ['', '-wal']) writeFileSync(killed + suffix, readFileSync(at.file + suffix));
    const restored = await restoreRecord(at.backup, killed, now);
    expect(restored).toMatchObject({ ok: true });
    expect(roomsIn(killed)).toEqual([1]);
    expect(restored.ok && restored.replaced !== undefined && roomsIn(restored.replaced)).toEqual([1, 2]);
    closeRecord(record);
  });

  it.each([
    ['idle', () => undefined],
    ['reading', (record: RecordDatabase) => record.exec('BEGIN; SELECT * FROM rooms')],
    ['writing', (record: RecordDatabase) => record.exec('BEGIN IMMEDIATE; INSERT INTO rooms VALUES (9)')],
    ['fresh from a checkpoint', (record: RecordDatabase) => record.pragma('wal_checkpoint(TRUNCATE)')],
  ])('is refused while a connection is %s, and changes nothing', async (_, act) => {
    const at = place();
    await backedUp(at, 1);
    const record = open(at.file);
    write(record, 2);
    act(record);
    expect(await restoreRecord(at.backup, at.file, now)).toEqual({ ok: false, problem: expect.stringMatching(/A process has .* open/) });
    if (record.inTransaction) record.exec('ROLLBACK');
    expect(record.prepare('SELECT number FROM rooms').pluck().all()).toEqual([1, 2]);
    expect(readdirSync(at.folder).filter((name) => name.includes('replaced'))).toEqual([]);
  });

  it.each([
    ['that is not there', () => undefined, /There is no file/],
    ['that is damaged', damagedRecord, /It is damaged/],
    ['that was cut off', (file: string) => truncated(file), /damaged|malformed|not a database/],
    ['of something else', otherDatabase, /of something else/],
    ['that is empty', (file: string) => writeFileSync(file, ''), /of something else/],
    ['of a newer version', (file: string) => newerRecord(file), /newer than this version of Holdfast/],
  ])('of a backup %s is refused, and changes nothing', async (_, prepare, says) => {
    const { folder, file, backup } = place();
    prepare(backup);
    const record = openRecord(file, now);
    write(record, 7);
    closeRecord(record);
    expect(await restoreRecord(backup, file, now)).toEqual({ ok: false, problem: expect.stringMatching(says) });
    expect(roomsIn(file)).toEqual([7]);
    expect(readdirSync(folder).filter((name) => name.startsWith('holdfast.sqlite'))).toEqual(['holdfast.sqlite']);
  });

  it('is refused onto a file that is not a record', async () => {
    const at = place();
    await backedUp(at, 1);
    const other = join(at.folder, 'other.sqlite');
    otherDatabase(other);
    const text = join(at.folder, 'text.sqlite');
    writeFileSync(text, 'x'.repeat(5000));
    expect(await restoreRecord(at.backup, other, now)).toMatchObject({ ok: false, problem: expect.stringMatching(/of something else/) });
    expect(await restoreRecord(at.backup, text, now)).toMatchObject({ ok: false, problem: expect.stringMatching(/Move it away/) });
    expect(await restoreRecord(at.backup, at.backup, now)).toMatchObject({
      ok: false,
      problem: expect.stringMatching(/is the record itself/),
    });
  });

  it('replaces a damaged record, and keeps even that as it was', async () => {
    const at = place();
    await backedUp(at, 1);
    const damaged = join(at.folder, 'damaged.sqlite');
    damagedRecord(damaged);
    const restored = await restoreRecord(at.backup, damaged, now);
    expect(restored).toMatchObject({ ok: true, rows: { rooms: 1 } });
    expect(restored.ok && existsSync(restored.replaced ?? '')).toBe(true);
  });

  it('that broke off leaves a record that does not open, and is finished by running it again', async () => {
    const at = place();
    await backedUp(at, 1, 2);
    const record = new Database(at.file);
    // The mark of step 3, as a kill between 3 and 4 leaves it.
    record.pragma(`application_id = ${0x52455354}`);
    record.close();
    expect(() => openRecord(at.file, now)).toThrow(/is being restored, or a restore broke off/);
    expect(await restoreRecord(at.backup, at.file, now)).toMatchObject({ ok: true, rows: { rooms: 2 } });
    expect(open(at.file).prepare('SELECT count(*) FROM rooms').pluck().get()).toBe(2);
  });
});

function truncated(file: string): void {
  damagedRecord(file);
  const bytes = readFileSync(file);
  writeFileSync(file, bytes.subarray(0, Math.floor(bytes.length / 2)));
}

function newerRecord(file: string): void {
  const record = openRecord(file, now);
  record.prepare("INSERT INTO migrations VALUES (9999, 'from-the-future', 'x', '2030-01-01T00:00:00.000Z')").run();
  closeRecord(record);
}

describe('a record', () => {
  it('is not opened over a database of something else, which stays as it is', () => {
    const { file } = place();
    otherDatabase(file);
    const before = readFileSync(file);
    expect(() => openRecord(file, now)).toThrow(/is an SQLite file of something else/);
    expect(readFileSync(file).equals(before)).toBe(true);
  });
});
