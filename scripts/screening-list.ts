/** Takes a list from a file into the record of a screening, whole or not at all, by the service's own import. */
import { createReadStream } from 'node:fs';
import { createInterface } from 'node:readline';
import type { EntryKind } from '../db/entries.ts';
import type { Stores } from '../db/stores.ts';
import { IMPORT_LIMITS } from '../server/imports/import-limits.ts';
import { importing } from '../server/imports/importing.ts';
import { listRows } from '../server/imports/list-rows.ts';
import type { ImportedRow } from '../server/schemas/import-calls.ts';
import type { ScreenList } from './screen-arguments.ts';

/** lines for a terminal, the first one the heading; none where all is well */
export type Complaint = readonly string[];

export async function takeList(stores: Stores, kind: EntryKind, { file, type }: ScreenList): Promise<Complaint> {
  const imports = importing({
    entries: stores.entries,
    staging: stores.importStaging,
    limits: IMPORT_LIMITS,
    now: () => new Date(),
    log: { error: (particulars, message) => console.error(message, particulars) },
  });
  try {
    const rows = listRows({ type, charset: undefined, bytes: createReadStream(file) }, kind, IMPORT_LIMITS, undefined);
    const result = await imports.importList(kind, rows, { onError: 'stop', dryRun: false });
    if (!result.ok) return [`${file} cannot be read`, result.failure instanceof Error ? result.failure.message : result.failure.code];
    const complaint: string[] = [];
    for await (const line of createInterface({ input: result.report })) {
      const row = JSON.parse(line) as Partial<ImportedRow>;
      if (row.outcome !== 'refused') continue;
      const issues = row.issues ?? [];
      complaint.push(`${file}, row ${row.row}`, ...issues.map(({ path, message }) => `${path === '' ? 'the row' : path} ${message}`));
    }
    return complaint;
  } catch (error) {
    const { code, message } = error as NodeJS.ErrnoException;
    if (code === 'ENOENT') return [`there is no file ${file}`];
    if (code === 'EISDIR') return [`${file} is a folder; name a file in it`];
    if (code === 'EACCES') return [`${file} cannot be read: its permissions do not allow it`];
    if (code === undefined) throw error;
    return [`${file} cannot be read: ${message}`];
  } finally {
    await imports.settled();
  }
}
