/** Says what became of a list, as lines of NDJSON: one for each row in the list's order, as soon as it is known, and a summary. */
import { once } from 'node:events';
import type { ImportStaging, StagedRow } from '../../db/import-staging.ts';
import type { ImportedRow, ImportSummary } from '../schemas/import-calls.ts';
import type { Issue } from '../schemas/wire-parsing.ts';
import type { Applying } from './import-applying.ts';
import type { StagedImport } from './staged-import.ts';

/** rows read, and lines sent, at a time */
const PAGE = 256;

type Counts = { [outcome in ImportedRow['outcome']]: number };

/** `applying` is undefined where the import stopped. Throws what the applying failed with, so that the answer breaks off. */
export async function* importReport(
  staging: ImportStaging,
  { importId, stoppedAtRow }: StagedImport,
  applying: Applying | undefined,
  dryRun: boolean,
): AsyncGenerator<string> {
  const counts: Counts = { created: 0, revised: 0, unchanged: 0, refused: 0, 'not-kept': 0 };
  let after = 0;
  for (;;) {
    const ended = applying?.hasEnded() ?? true;
    const page = staging.rows(importId, after, PAGE);
    const known = applying === undefined ? page : page.slice(0, firstUnknown(page));
    if (known.length > 0) {
      after = known.at(-1)?.row ?? after;
      yield known.map((row) => lineOf(row, counts)).join('');
    } else if (ended) break;
    else if (applying !== undefined) await once(applying.progress, 'batch');
  }
  await applying?.done;
  const summary: ImportSummary = {
    rows: Object.values(counts).reduce((sum, count) => sum + count, 0),
    created: counts.created,
    revised: counts.revised,
    unchanged: counts.unchanged,
    refused: counts.refused,
    notKept: counts['not-kept'],
    kept: !dryRun && stoppedAtRow === undefined,
    dryRun,
    stoppedAtRow: stoppedAtRow ?? null,
  };
  yield `${JSON.stringify({ summary })}\n`;
}

function firstUnknown(page: readonly StagedRow[]): number {
  const index = page.findIndex(({ outcome }) => outcome === null);
  return index < 0 ? page.length : index;
}

function lineOf({ row, id, outcome, issues }: StagedRow, counts: Counts): string {
  const line: ImportedRow = { row, id, outcome: outcome ?? 'not-kept' };
  counts[line.outcome] += 1;
  if (issues !== null) line.issues = JSON.parse(issues) as Issue[];
  return `${JSON.stringify(line)}\n`;
}
