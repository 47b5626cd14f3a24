/**
 * Puts a staged list into the catalogue, in short transactions that each note what became of their rows, and lets whoever reports it
 * follow. It does not wait for anybody: a client that reads slowly, or has gone, holds nothing back.
 */
import { EventEmitter } from 'node:events';
import type { EntryKind, EntryStore, PutOutcome } from '../../db/entries.ts';
import type { ImportStaging, StagedRow } from '../../db/import-staging.ts';
import { type EntryOf, putEntry } from '../catalogue/entries.ts';
import type { Entry } from '../schemas/entry.ts';
import { pacing, STRETCH } from './pacing.ts';

/** rows put in one transaction at most; the transaction ends earlier where they take longer than a stretch of work may */
const BATCH = 96;

export interface ApplyingDependencies {
  readonly entries: EntryStore;
  readonly staging: ImportStaging;
  readonly now: () => Date;
}

/** An applying under way. Emits `batch` after each transaction and once more when it has ended, well or not. */
export interface Applying {
  readonly progress: EventEmitter;
  readonly hasEnded: () => boolean;
  /** rejects where a row could not be written, such as on a full disk; the rest is applied when the service starts again */
  readonly done: Promise<void>;
}

export function applyList(dependencies: ApplyingDependencies, importId: number, kind: EntryKind, dryRun: boolean): Applying {
  const progress = new EventEmitter();
  let ended = false;
  const done = applyAll(dependencies, importId, kind, dryRun, () => progress.emit('batch')).finally(() => {
    ended = true;
    progress.emit('batch');
  });
  return { progress, hasEnded: () => ended, done };
}

async function applyAll(
  { entries, staging, now }: ApplyingDependencies,
  importId: number,
  kind: EntryKind,
  dryRun: boolean,
  tell: () => void,
): Promise<void> {
  const breathe = pacing();
  const put = ({ id, content }: StagedRow, at: Date): PutOutcome => {
    if (id === null || content === null) throw new Error('A row that is to be applied has neither id nor content.');
    const entry = JSON.parse(content) as Entry;
    const result = putEntry(entries, id, { kind, entry } as EntryOf, { kind: 'whatever' }, at);
    if (!result.ok) throw new Error('A put that expects nothing was refused.');
    return result.outcome;
  };
  /** What became of the first of the rows: as many as can be put in one stretch, at least one where there is one. */
  const putSome = (rows: readonly StagedRow[]): readonly PutOutcome[] => {
    const begun = performance.now();
    const at = now();
    const outcomes: PutOutcome[] = [];
    for (const row of rows) {
      outcomes.push(put(row, at));
      if (performance.now() - begun > STRETCH) break;
    }
    return outcomes;
  };
  const applyBatch = (after: number): number | undefined =>
    entries.together(() => {
      const rows = staging.toApply(importId, after, BATCH);
      const putThem = () => putSome(rows);
      const outcomes = dryRun ? undone(entries, putThem) : putThem();
      for (const [index, outcome] of outcomes.entries()) staging.note(importId, rows[index]?.row ?? 0, outcome);
      return rows[outcomes.length - 1]?.row;
    });

  for (let after = applyBatch(0); after !== undefined; after = applyBatch(after)) {
    tell();
    await breathe();
  }
}

const UNDO = Symbol('undo');

/** What `act` gives, with everything that it wrote taken back. */
function undone<T>(entries: EntryStore, act: () => T): T {
  let result: { readonly value: T } | undefined;
  try {
    entries.together(() => {
      result = { value: act() };
      throw UNDO;
    });
  } catch (thrown) {
    if (thrown !== UNDO) throw thrown;
  }
  if (result === undefined) throw new Error('An undone act gave nothing.');
  return result.value;
}
