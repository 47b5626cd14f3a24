/**
 * What tells a whole copy of a record from one that only looks like it: SQLite's own integrity check, the mark of the file, and the
 * number of rows in every table. Used on what a backup has written and on what a restore is given.
 */
import { existsSync } from 'node:fs';
import Database from 'better-sqlite3';
import { refuseUnknownSchema } from './migrations.ts';
import { APPLICATION_ID, RESTORING_ID, type RecordDatabase } from './record.ts';

/** rows by table, without those that SQLite keeps for itself */
export type RowCounts = { readonly [table: string]: number };

export type Opened = { readonly ok: true; readonly record: RecordDatabase } | { readonly ok: false; readonly problem: string };

/** Opens a record that exists without changing its schema, or says why it is none. The caller closes it. */
export function openExisting(file: string): Opened {
  if (!existsSync(file)) return { ok: false, problem: `There is no file ${file}.` };
  let record: RecordDatabase | undefined;
  try {
    record = new Database(file, { fileMustExist: true });
    record.pragma('trusted_schema = OFF');
    record.pragma('cell_size_check = ON');
    const id = record.pragma('application_id', { simple: true });
    if (id === APPLICATION_ID) return { ok: true, record };
    record.close();
    if (id === RESTORING_ID) return { ok: false, problem: `${file} is left over from a restore that broke off. Run the restore again.` };
    return { ok: false, problem: `${file} is an SQLite file of something else, not a record of Holdfast.` };
  } catch (error) {
    record?.close();
    if (!(error instanceof Database.SqliteError)) throw error;
    return { ok: false, problem: `${file} cannot be read as a record: ${error.message}.` };
  }
}

export function rowCounts(record: RecordDatabase): RowCounts {
  const tables = record
    .prepare<[], string>("SELECT name FROM sqlite_schema WHERE type = 'table' AND name NOT LIKE 'sqlite_%' ORDER BY name")
    .pluck()
    .all();
  return Object.fromEntries(
    tables.map((table) => [table, record.prepare<[], number>(`SELECT count(*) FROM "${table}"`).pluck().get() ?? 0]),
  );
}

/** Why the file of this connection cannot be relied on; undefined where nothing is wrong with it. */
export function damageOf(record: RecordDatabase): string | undefined {
  try {
    const found = record.pragma('integrity_check(5)') as { integrity_check: string }[];
    const faults = found.map(({ integrity_check }) => integrity_check).filter((line) => line !== 'ok');
    if (faults.length > 0) return `It is damaged: ${faults.join('; ')}.`;
    const orphans = record.pragma('foreign_key_check') as { table: string }[];
    if (orphans.length > 0)
      return `It is damaged: ${orphans.length} rows refer to rows that are not there, the first in ${orphans[0]?.table}.`;
    refuseUnknownSchema(record);
    return undefined;
  } catch (error) {
    if (error instanceof Database.SqliteError) return `It is damaged: ${error.message}.`;
    return error instanceof Error ? error.message : String(error);
  }
}

/**
 * The first table whose number of rows in the copy is not one that the original had meanwhile; undefined where all are. The original
 * may be written to while it is copied, so it is counted before and after.
 */
export function tableThatDiffers(copy: RowCounts, before: RowCounts, after: RowCounts): string | undefined {
  const tables = new Set([copy, before, after].flatMap((counts) => Object.keys(counts)));
  return [...tables].find((table) => {
    const [rows, one, other] = [copy[table], before[table], after[table]];
    return rows === undefined || one === undefined || other === undefined || rows < Math.min(one, other) || rows > Math.max(one, other);
  });
}
