/**
 * Takes a list in: every row is checked and staged in the record while it arrives, so that neither the list nor what was seen of it is
 * held in memory. The catalogue is not touched before the list is whole.
 */
import type { EntryKind, EntryStore } from '../../db/entries.ts';
import type { ImportStaging, StagedRow } from '../../db/import-staging.ts';
import type { ImportLimits } from './import-limits.ts';
import { ListRefused } from './list-refused.ts';
import type { ListRow } from './list-row.ts';
import { pacing } from './pacing.ts';
import { checkRow, refused } from './row-check.ts';

/** rows staged in one transaction: a few ms */
const BATCH = 64;

export interface StagedImport {
  readonly importId: number;
  /** where the first refused row ended the reading; undefined where all was read */
  readonly stoppedAtRow: number | undefined;
}

interface Staging {
  readonly entries: Pick<EntryStore, 'together'>;
  readonly staging: ImportStaging;
  readonly limits: ImportLimits;
}

/** Throws ListRefused, or what the source throws; what is staged by then is the caller's to forget. */
export async function stageList(
  { entries, staging, limits }: Staging,
  importId: number,
  kind: EntryKind,
  rows: AsyncIterable<ListRow>,
  stopAtRefused: boolean,
): Promise<StagedImport> {
  const breathe = pacing();
  let batch: StagedRow[] = [];
  /** Gives the row that stops the import, where one does; what follows it in the batch is dropped. */
  const storeBatch = (): StagedRow | undefined =>
    entries.together(() => {
      const rows = batch;
      batch = [];
      for (const row of rows) {
        const stored = stageOne(staging, importId, row);
        if (stopAtRefused && stored.outcome === 'refused') return stored;
      }
      return undefined;
    });

  for await (const row of rows) {
    if (row.row > limits.rows) throw new ListRefused('list-too-large', `The list has more than ${limits.rows} rows. Send it in parts.`);
    const checked = checkRow(kind, row);
    batch.push(checked);
    const stop = batch.length >= BATCH || checked.outcome === 'refused' ? storeBatch() : undefined;
    if (stop !== undefined) return { importId, stoppedAtRow: stop.row };
    await breathe();
  }
  return { importId, stoppedAtRow: storeBatch()?.row };
}

/** A second row with an id is refused even where the first one was: which of them is meant, only the list's owner knows. */
function stageOne(staging: ImportStaging, importId: number, row: StagedRow): StagedRow {
  const first = row.id === null ? undefined : staging.rowWithEntry(importId, row.id);
  const staged =
    first === undefined || row.outcome === 'refused'
      ? row
      : refused(row.row, row.id, [{ path: 'id', message: `is the id of row ${first} as well; a list names an entry once` }]);
  staging.stage(importId, staged);
  return staged;
}
