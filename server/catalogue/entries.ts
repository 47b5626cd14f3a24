/**
 * Puts, reads and deletes the catalogue's entries. A changed entry becomes a new revision; the same entry put again changes nothing.
 * Imports go through `putEntry` as well, many inside one `store.together`.
 */
import type { EntryKind, EntryRow, EntryStore, EntryWrite, PutOutcome } from '../../db/entries.ts';
import type { DimmerEntry, Entry, LampEntry, StoredEntry } from '../schemas/entry.ts';
import { canonicalJson } from '../verdicts/canonical-inputs.ts';
import { type Expectation, type Unmet, unmetBy } from './expectations.ts';
import { foldedWords } from './name-words.ts';

export type EntryOf = { readonly kind: 'dimmer'; readonly entry: DimmerEntry } | { readonly kind: 'lamp'; readonly entry: LampEntry };

export type EntryPut =
  | { readonly ok: true; readonly outcome: PutOutcome; readonly entry: StoredEntry }
  | { readonly ok: false; readonly failure: Unmet };

/**
 * Puts an entry where `expectation` is met. One that is already as sent is left alone whatever is expected: a client that repeats a
 * put because the answer was lost gets the answer.
 */
export function putEntry(store: EntryStore, id: string, of: EntryOf, expectation: Expectation, now: Date): EntryPut {
  return store.together(() => {
    const write = writeOf(id, of);
    const current = store.find(of.kind, id);
    if (current?.content !== write.content) {
      const failure = unmetBy(expectation, current?.revision);
      if (failure !== undefined) return { ok: false, failure };
    }
    const { row, outcome } = store.put(write, now.toISOString());
    return { ok: true, outcome, entry: storedEntry(row) };
  });
}

export type EntryDeletion = { readonly ok: true } | { readonly ok: false; readonly failure: Unmet | { readonly kind: 'entry-not-found' } };

/** Its revisions and verdicts stay readable. Nothing need be expected: a deleted entry can be put back. */
export function deleteEntry(store: EntryStore, kind: EntryKind, id: string, expectation: Expectation, now: Date): EntryDeletion {
  return store.together(() => {
    const current = store.find(kind, id);
    if (current === undefined) return { ok: false, failure: { kind: 'entry-not-found' } };
    const failure = expectation.kind === 'unstated' ? undefined : unmetBy(expectation, current.revision);
    if (failure !== undefined) return { ok: false, failure };
    store.delete(kind, id, now.toISOString());
    return { ok: true };
  });
}

export function readEntry(store: EntryStore, kind: EntryKind, id: string, revision?: number): StoredEntry | undefined {
  const row = revision === undefined ? store.find(kind, id) : store.findRevision(kind, id, revision);
  return row === undefined ? undefined : storedEntry(row);
}

export function storedEntry({ id, revision, content, created_at, revised_at }: EntryRow): StoredEntry {
  const entry = JSON.parse(content) as Entry;
  return { id, revision, createdAt: created_at, revisedAt: revised_at, ...entry };
}

function writeOf(id: string, { kind, entry }: EntryOf): EntryWrite {
  // The order of tags means nothing, so it makes no revision either.
  const content = entry.tags === undefined ? entry : { ...entry, tags: [...entry.tags].sort() };
  return {
    kind,
    id,
    content: canonicalJson(content),
    circuit: canonicalJson(kind === 'dimmer' ? entry.dimmer : entry.lamp),
    name: entry.name ?? null,
    articleNumber: entry.articleNumber ?? null,
    ratedPower: (kind === 'dimmer' ? entry.dimmer.ratings?.maximumLoad_W : entry.lamp.ratedPower_W) ?? null,
    tags: entry.tags ?? [],
    words: foldedWords(entry.name ?? ''),
  };
}
