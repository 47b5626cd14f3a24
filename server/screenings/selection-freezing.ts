/** Freezes what a screening selects from the catalogue: each entry with its latest revision, at its place in the selection. */
import type { EntryKind } from '../../db/entries.ts';
import type { ScreeningRow } from '../../db/screenings.ts';
import { foldedWords } from '../catalogue/name-words.ts';
import type { AskedScreening, Selection } from '../schemas/screening.ts';
import type { Issue } from '../schemas/wire-parsing.ts';
import type { ScreeningStores } from './screening-dependencies.ts';

/** pairings of one screening; a year's work for a hundred cores */
export const MOST_PAIRINGS = 100_000_000;
const SEARCH_PAGE = 1_000;

export type Freezing = { readonly ok: true } | { readonly ok: false; readonly issues: readonly Issue[] };
type Asked = Pick<AskedScreening, 'lamps' | 'dimmers' | 'counts'>;

/** Inside a transaction that is rolled back where it is refused. */
export function freezeSelection(stores: ScreeningStores, { seq }: Pick<ScreeningRow, 'seq'>, asked: Asked): Freezing {
  const { screeningSelection: selection, screenings } = stores;
  const absent = [...absentIds(stores, 'lamp', asked.lamps), ...absentIds(stores, 'dimmer', asked.dimmers)];
  if (absent.length > 0) return { ok: false, issues: absent };
  selection.clear(seq);
  const lamps = freezeKind(stores, seq, 'lamp', asked.lamps);
  const dimmers = freezeKind(stores, seq, 'dimmer', asked.dimmers);
  const issues = [
    ...(lamps === 0 ? [{ path: 'lamps', message: 'selects no lamp of the catalogue' }] : []),
    ...(dimmers === 0 ? [{ path: 'dimmers', message: 'selects no dimmer of the catalogue' }] : []),
  ];
  if (issues.length > 0) return { ok: false, issues };
  const total = lamps * dimmers * asked.counts.length;
  if (total > MOST_PAIRINGS) {
    const message = `selects too much: ${lamps} lamps x ${dimmers} dimmers x ${asked.counts.length} counts are ${total} pairings, a screening holds ${MOST_PAIRINGS} at most`;
    return { ok: false, issues: [{ path: 'lamps', message }] };
  }
  screenings.resize(seq, { lamps, dimmers, total });
  return { ok: true };
}

function freezeKind(
  { screeningSelection: selection, entrySearch }: ScreeningStores,
  seq: number,
  kind: EntryKind,
  chosen: Selection,
): number {
  if ('ids' in chosen) return selection.addIds(seq, kind, chosen.ids);
  if ('tag' in chosen) return selection.addTagged(seq, kind, chosen.tag);
  if ('all' in chosen) return selection.addAll(seq, kind);
  let added = 0;
  for (let after: string | undefined = ''; after !== undefined; ) {
    const page = entrySearch.page(kind, { words: foldedWords(chosen.search) }, after, SEARCH_PAGE);
    added += selection.addIds(
      seq,
      kind,
      page.headings.map(({ id }) => id),
    );
    after = page.next;
  }
  return added;
}

function absentIds({ screeningSelection: selection }: ScreeningStores, kind: EntryKind, chosen: Selection): readonly Issue[] {
  if (!('ids' in chosen)) return [];
  const message = `is no ${kind} of the catalogue`;
  return selection.missing(kind, chosen.ids).map((index) => ({ path: `${kind}s.ids[${index}]`, message }));
}
