import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import Database from 'better-sqlite3';
import { describe, expect, it, onTestFinished } from 'vitest';
import { migrate, readMigrations } from '../../db/migrations.ts';
import { closeRecord, openRecord, type RecordDatabase } from '../../db/record.ts';
import { NEWEST, verdictSearch } from '../../db/verdict-search.ts';
import { verdictStore } from '../../db/verdicts.ts';
import { FIXED_NOW, temporaryFolder, temporaryRecord } from '../support/server-temporary-record.ts';

const now = () => FIXED_NOW;

function schemaOf(record: RecordDatabase): string {
  const rows = record
    .prepare<[], { sql: string }>("SELECT sql FROM sqlite_schema WHERE sql IS NOT NULL AND name NOT LIKE 'sqlite_%' ORDER BY type, name")
    .all();
  return `${rows.map(({ sql }) => `${sql};`).join('\n\n')}\n`;
}

function folderWith(files: { readonly [name: string]: string }): URL {
  const folder = join(temporaryFolder(), 'migrations');
  mkdirSync(folder);
  for (const [name, text] of Object.entries(files)) writeFileSync(join(folder, name), text);
  return pathToFileURL(`${folder}/`);
}

describe('migrations', () => {
  // Written again with `npx vitest run --config tests/vitest.config.ts tests/db -u` after a migration was added.
  it('lead to the schema in the golden file', async () => {
    await expect(schemaOf(temporaryRecord())).toMatchFileSnapshot('./schema.golden.sql');
  });

  it('make only STRICT tables', () => {
    const tables = temporaryRecord().pragma('table_list') as { name: string; type: string; strict: number }[];
    const ours = tables.filter(({ name, type }) => type === 'table' && !name.startsWith('sqlite_'));
    expect(ours.map(({ name }) => name).sort()).toEqual([
      'entries',
      'entry_tags',
      'entry_words',
      'evidence',
      'import_rows',
      'imports',
      'judged_pairs',
      'migrations',
      'requirements',
      'revisions',
      'screening_entries',
      'screening_events',
      'screening_failures',
      'screening_pages',
      'screening_pairs',
      'screenings',
      'verdicts',
    ]);
    expect(ours.filter(({ strict }) => strict !== 1)).toEqual([]);
  });

  it('change nothing when they run a second time', () => {
    const record = temporaryRecord();
    const before = record.prepare('SELECT * FROM migrations').all();
    migrate(record, () => new Date('2027-01-01T00:00:00.000Z'));
    expect(record.prepare('SELECT * FROM migrations').all()).toEqual(before);
    expect(before).toHaveLength(readMigrations().length);
  });

  it('refuse a record whose schema is newer than the code, and leave it as it was', () => {
    const file = join(temporaryFolder(), 'holdfast.sqlite');
    const record = openRecord(file, now);
    record.prepare("INSERT INTO migrations VALUES (9999, 'from-the-future', 'x', '2030-01-01T00:00:00.000Z')").run();
    closeRecord(record);
    expect(() => openRecord(file, now)).toThrow(/newer than this version.*9999 \(from-the-future\)/);
  });

  it('refuse a record that an edited migration made', () => {
    const record = temporaryRecord();
    record.prepare("UPDATE migrations SET sha256 = 'other' WHERE number = 1").run();
    expect(() => migrate(record, now)).toThrow(/Migration 1 \(verdicts\).*never edited/);
  });

  it('apply only what is missing, and roll a failing one back whole', () => {
    const record = temporaryRecord();
    const next = { number: readMigrations().length + 1, name: 'two-steps', sha256: 's' };
    const broken = [...readMigrations(), { ...next, sql: 'CREATE TABLE half (x INTEGER) STRICT; CREATE TABLE half (y INTEGER) STRICT;' }];
    expect(() => migrate(record, now, broken)).toThrow(/half/);
    expect(schemaOf(record)).not.toContain('half');

    migrate(record, now, [...readMigrations(), { ...next, sql: 'CREATE TABLE whole (x INTEGER) STRICT;' }]);
    expect(schemaOf(record)).toContain('whole');
  });

  it('are refused where a number is missing or a name is out of line', () => {
    expect(() => readMigrations(folderWith({ '0001-a.sql': '', '0003-c.sql': '' }))).toThrow(/0003-c\.sql.*2 was expected/);
    expect(() => readMigrations(folderWith({ '1-a.sql': '' }))).toThrow(/not named like/);
  });
});

describe('a record of before the evidence was compressed', () => {
  it('keeps every verdict, in order, readable to the letter, and numbered without gaps', () => {
    const file = join(temporaryFolder(), 'holdfast.sqlite');
    const old = new Database(file);
    old.pragma('application_id = 0x484f4c44');
    migrate(old, now, readMigrations().slice(0, 3));
    const pairing = '{"lamps":[{"count":2},{"count":3}],"mains":{"voltage_V":230.5}}';
    const columns = {
      grade: 'suitable',
      summary: 'Old.',
      mains_voltage: 230.5,
      mains_frequency: 50,
      pairing,
      assumptions: '[{"value":0.10}]',
    };
    const insert = old.prepare(
      `INSERT INTO verdicts (seq, id, fingerprint, model_version, created_at, grade, summary, mains_voltage, mains_frequency, pairing,
         assumptions, judgement)
       VALUES (@seq, @id, @fingerprint, '1', @created_at, @grade, @summary, @mains_voltage, @mains_frequency, @pairing, @assumptions, @judgement)`,
    );
    const fingerprints = ['0a', 'ff'].map((byte) => byte.repeat(32));
    for (const [index, fingerprint] of fingerprints.entries()) {
      const created_at = `2026-02-0${index + 1}T23:59:59.00${index + 1}Z`;
      const id = fingerprint.slice(0, 26);
      insert.run({ seq: index * 7 + 3, id, fingerprint, created_at, judgement: `{"grade":"suitable","number":${index}}`, ...columns });
    }
    old.close();

    const record = openRecord(file, now);
    onTestFinished(() => closeRecord(record));
    const store = verdictStore(record);
    expect(store.count()).toBe(2);
    expect(fingerprints.map((fingerprint) => store.findByFingerprint(fingerprint))).toEqual(
      fingerprints.map((fingerprint, index) => ({
        id: fingerprint.slice(0, 26),
        fingerprint,
        model_version: '1',
        created_at: `2026-02-0${index + 1}T23:59:59.00${index + 1}Z`,
        lamp_count: 5,
        judgement: `{"grade":"suitable","number":${index}}`,
        ...columns,
        // The text was kept and is parsed and written again: 0.10 is 0.1.
        assumptions: '[{"value":0.1}]',
      })),
    );
    const { headings } = verdictSearch(record).page({}, NEWEST, 10);
    expect(headings.map(({ seq, id }) => [seq, id])).toEqual([
      [2, 'f'.repeat(26)],
      [1, '0a'.repeat(13)],
    ]);
  });
});
