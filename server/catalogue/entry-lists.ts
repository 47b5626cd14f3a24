/** Lists the catalogue's entries by a search, a page at a time. */
import type { EntryKind } from '../../db/entries.ts';
import type { EntrySearch, EntryHeading as HeadingRow } from '../../db/entry-search.ts';
import type { EntryHeading, EntryListQuery } from '../schemas/entry-calls.ts';
import { DEFAULT_LIMIT } from '../schemas/url-values.ts';
import { foldedWords } from './name-words.ts';

export type EntryPage =
  | { readonly ok: true; readonly items: EntryHeading[]; readonly nextCursor: string | null }
  | { readonly ok: false; readonly failure: { readonly kind: 'bad-cursor' } };

export function entryPage(search: EntrySearch, kind: EntryKind, query: EntryListQuery): EntryPage {
  const after = query.cursor === undefined ? '' : readCursor(query.cursor);
  if (after === undefined) return { ok: false, failure: { kind: 'bad-cursor' } };
  const filter = {
    words: foldedWords(query.name ?? ''),
    tag: query.tag,
    articleNumber: query.articleNumber,
    ratedPowerFrom: query.ratedPowerFrom_W,
    ratedPowerTo: query.ratedPowerTo_W,
  };
  const { headings, next } = search.page(kind, filter, after, query.limit ?? DEFAULT_LIMIT);
  return { ok: true, items: headings.map(headingToWire), nextCursor: next === undefined ? null : writeCursor(next) };
}

function headingToWire(row: HeadingRow): EntryHeading {
  return {
    id: row.id,
    revision: row.revision,
    name: row.name,
    articleNumber: row.article_number,
    ratedPower_W: row.rated_power,
    tags: JSON.parse(row.tags) as string[],
    revisedAt: row.revised_at,
  };
}

/** Opaque to clients, so that what a page is keyed by can change. */
function writeCursor(id: string): string {
  return Buffer.from(`after-${id}`).toString('base64url');
}

function readCursor(cursor: string): string | undefined {
  const [, id] = /^after-([\w.-]{1,64})$/.exec(Buffer.from(cursor, 'base64url').toString('latin1')) ?? [];
  return id !== undefined && writeCursor(id) === cursor ? id : undefined;
}
