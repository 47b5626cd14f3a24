/**
 * Brings a record's schema up to date from the numbered files in db/migrations, which are only ever appended to. Refuses to touch
 * a record whose schema is newer than this code, or one that was made by another text of a known migration.
 */
import { createHash } from 'node:crypto';
import { readdirSync, readFileSync } from 'node:fs';
import type Database from 'better-sqlite3';

export interface Migration {
  readonly number: number;
  readonly name: string;
  readonly sql: string;
  readonly sha256: string;
}

const FOLDER = new URL('./migrations/', import.meta.url);
const FILE_NAME = /^(\d{4})-([a-z0-9-]+)\.sql$/;

const MIGRATIONS_TABLE = `CREATE TABLE IF NOT EXISTS migrations (
  number INTEGER PRIMARY KEY,
  name TEXT NOT NULL,
  sha256 TEXT NOT NULL,
  applied_at TEXT NOT NULL
) STRICT`;

/** The migrations of a folder in their order; throws where a name or a number is out of line. */
export function readMigrations(folder: URL = FOLDER): readonly Migration[] {
  const files = readdirSync(folder).sort();
  return files.map((file, index) => {
    const [, digits, name] = FILE_NAME.exec(file) ?? [];
    if (digits === undefined || name === undefined) throw new Error(`Migration file ${file} is not named like 0001-what-it-does.sql.`);
    const number = Number(digits);
    if (number !== index + 1) throw new Error(`Migration file ${file} breaks the numbering: ${index + 1} was expected.`);
    const sql = readFileSync(new URL(file, folder), 'utf8');
    return { number, name, sql, sha256: createHash('sha256').update(sql).digest('hex') };
  });
}

/** Applies what is missing, each file in its own immediate transaction. Running it twice does nothing the second time. */
export function migrate(record: Database.Database, now: () => Date, migrations: readonly Migration[] = readMigrations()): void {
  record.exec(MIGRATIONS_TABLE);
  const applyMissing = record.transaction((migration: Migration) => {
    // Read inside the transaction: another process may have applied it since.
    const applied = appliedMigrations(record);
    refuseForeignSchema(applied, migrations);
    if (applied.length >= migration.number) return;
    record.exec(migration.sql);
    record
      .prepare('INSERT INTO migrations (number, name, sha256, applied_at) VALUES (?, ?, ?, ?)')
      .run(migration.number, migration.name, migration.sha256, now().toISOString());
  });
  refuseForeignSchema(appliedMigrations(record), migrations);
  for (const migration of migrations) applyMissing.immediate(migration);
}

/** Throws where this code does not know the schema of a record; changes nothing. */
export function refuseUnknownSchema(record: Database.Database, migrations: readonly Migration[] = readMigrations()): void {
  refuseForeignSchema(appliedMigrations(record), migrations);
}

type Applied = Pick<Migration, 'number' | 'name' | 'sha256'>;

function appliedMigrations(record: Database.Database): readonly Applied[] {
  return record.prepare<[], Applied>('SELECT number, name, sha256 FROM migrations ORDER BY number').all();
}

function refuseForeignSchema(applied: readonly Applied[], known: readonly Migration[]): void {
  for (const { number, name, sha256 } of applied) {
    const ours = known[number - 1];
    if (ours === undefined) {
      throw new Error(
        `The record's schema is newer than this version of Holdfast: it holds migration ${number} (${name}), this version knows ${known.length}. Start a version that knows it.`,
      );
    }
    if (ours.sha256 !== sha256) {
      throw new Error(`Migration ${number} (${name}) of the record has another text than this version's. Migrations are never edited.`);
    }
  }
}
