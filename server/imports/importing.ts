/**
 * Imports a list into the catalogue: takes it in whole, decides, applies it, reports. A list moves through these states:
 *
 *   arriving -> forgotten   refused as a whole, broken off by the client, or stopped at a refused row
 *   arriving -> applying    whole; the decision is one committed row, after which it is finished whatever happens
 *   applying -> forgotten   all rows applied and reported
 *
 * A process that dies leaves lists in either state: `resumeImports` forgets the former and finishes the latter.
 */
import { finished, Readable } from 'node:stream';
import type { EntryKind } from '../../db/entries.ts';
import { type ApplyingDependencies, applyList } from './import-applying.ts';
import { type ImportLimits, MOST_IMPORTS_AT_ONCE } from './import-limits.ts';
import { importReport } from './import-report.ts';
import { ListRefused } from './list-refused.ts';
import type { ListRow } from './list-row.ts';
import { pacing } from './pacing.ts';
import { stageList } from './staged-import.ts';

export interface ImportDependencies extends ApplyingDependencies {
  readonly limits: ImportLimits;
  readonly log: { error(particulars: object, message: string): void };
}

export interface ImportOptions {
  readonly onError: 'skip' | 'stop';
  readonly dryRun: boolean;
}

export type ImportResult =
  | { readonly ok: true; readonly report: Readable }
  | { readonly ok: false; readonly failure: ListRefused }
  | { readonly ok: false; readonly failure: { readonly code: 'imports-busy' } };

export interface Importing {
  /** Settles when the list has arrived whole, or is refused; the report then follows the applying. */
  importList(kind: EntryKind, rows: AsyncIterable<ListRow>, options: ImportOptions): Promise<ImportResult>;
  /** Settles when nothing is being applied or forgotten; for stopping, once no request is open. */
  settled(): Promise<void>;
}

/** rows forgotten in one transaction */
const FORGET_BATCH = 256;

export function importing(dependencies: ImportDependencies): Importing {
  const { staging, now, log } = dependencies;
  const underWay = new Set<Promise<void>>();
  let running = 0;

  /** Runs on whether or not anybody waits; what fails is finished at the next start. */
  const inBackground = (importId: number, act: () => Promise<void>): void => {
    const acting = act()
      .catch((error: unknown) => log.error({ err: error, importId }, 'an import is left to be finished at the next start'))
      .finally(() => underWay.delete(acting));
    underWay.add(acting);
  };

  const takeIn = async (kind: EntryKind, rows: AsyncIterable<ListRow>, { onError, dryRun }: ImportOptions): Promise<Readable> => {
    const importId = staging.begin(kind, now().toISOString());
    try {
      const staged = await stageList(dependencies, importId, kind, rows, onError === 'stop');
      const stopped = staged.stoppedAtRow !== undefined;
      if (!stopped && !dryRun) staging.decide(importId);
      const applying = stopped ? undefined : applyList(dependencies, importId, kind, dryRun);
      const report = Readable.from(importReport(staging, staged, applying, dryRun), { objectMode: false });
      const read = new Promise<void>((resolve) => {
        finished(report, () => resolve());
      });
      inBackground(importId, async () => {
        await applying?.done.finally(() => {
          running -= 1;
        });
        // A reader that is slow keeps the rows that it has not read yet, and nothing else.
        await read;
        await forget(dependencies, importId);
      });
      if (stopped) running -= 1;
      return report;
    } catch (error) {
      inBackground(importId, () => forget(dependencies, importId));
      running -= 1;
      throw error;
    }
  };

  return {
    importList: async (kind, rows, options) => {
      if (running >= MOST_IMPORTS_AT_ONCE) return { ok: false, failure: { code: 'imports-busy' } };
      running += 1;
      try {
        return { ok: true, report: await takeIn(kind, rows, options) };
      } catch (error) {
        if (error instanceof ListRefused) return { ok: false, failure: error };
        throw error;
      }
    },
    settled: async () => {
      while (underWay.size > 0) await Promise.all(underWay);
    },
  };
}

/** What a process that died has left: for the start, before anything is imported. Gives how many lists it finished. */
export async function resumeImports(dependencies: ApplyingDependencies): Promise<number> {
  const { staging } = dependencies;
  for (const { id } of staging.unfinished('arriving')) await forget(dependencies, id);
  const decided = staging.unfinished('applying');
  for (const { id, kind } of decided) {
    await applyList(dependencies, id, kind, false).done;
    await forget(dependencies, id);
  }
  return decided.length;
}

async function forget({ staging }: Pick<ApplyingDependencies, 'staging'>, importId: number): Promise<void> {
  const breathe = pacing();
  while (!staging.forgetSome(importId, FORGET_BATCH)) await breathe();
}
