/**
 * Lists the catalogue's entries by id, filtered. The most telling filter walks its index in the order of ids; the others are checked
 * entry by entry. A page ends after a fixed number of entries looked at, so that a rare combination costs pages and not time.
 */
import type { EntryKind } from './entries.ts';
import { type Prepare, preparedOnce } from './prepared-statements.ts';
import type { RecordDatabase } from './record.ts';

export interface EntryFilter {
  /** beginnings of words of the name, folded; each must be there */
  readonly words: readonly string[];
  readonly tag?: string | undefined;
  readonly articleNumber?: string | undefined;
  /** W, both included */
  readonly ratedPowerFrom?: number | undefined;
  readonly ratedPowerTo?: number | undefined;
}

export interface EntryHeading {
  readonly id: string;
  readonly revision: number;
  readonly name: string | null;
  readonly article_number: string | null;
  readonly rated_power: number | null;
  /** JSON list */
  readonly tags: string;
  readonly revised_at: string;
}

export interface EntryPage {
  readonly headings: readonly EntryHeading[];
  /** the id after which the next page begins; undefined at the end */
  readonly next: string | undefined;
}

export interface EntrySearch {
  /** Up to `limit` entries with an id above `after`, in code-unit order; fewer, with a `next`, where many were looked at in vain. */
  page(kind: EntryKind, filter: EntryFilter, after: string, limit: number): EntryPage;
}

/** entries looked at for one page; some tens of milliseconds at most */
const MOST_LOOKED_AT = 5_000;
/** up to so many hits, sorting them all costs less than walking all ids */
const FEW = 2_000;

type Values = { [name: string]: string | number };

const WORD_RANGE = (index: number) => `word >= @word${index} AND word < @word${index}End`;
const POWER_RANGE = 'rated_power >= @powerFrom AND rated_power <= @powerTo';

export function entrySearch(record: RecordDatabase): EntrySearch {
  const prepare = preparedOnce(record);
  return {
    page: (kind, filter, after, limit) => {
      const values: Values = { kind, after, ...valuesOf(filter) };
      const candidates = prepare<{ id: string }>(walkFor(prepare, filter, values));
      const check = prepare<EntryHeading>(checkFor(filter));
      const headings: EntryHeading[] = [];
      let lookedAt = 0;
      let last = after;
      for (const { id } of candidates.iterate(values)) {
        if (headings.length === limit || lookedAt === MOST_LOOKED_AT) return { headings, next: last };
        lookedAt += 1;
        last = id;
        const heading = check.get({ ...values, id });
        if (heading !== undefined) headings.push(heading);
      }
      return { headings, next: undefined };
    },
  };
}

function valuesOf({ words, tag, articleNumber, ratedPowerFrom, ratedPowerTo }: EntryFilter): Values {
  const values: Values = { powerFrom: ratedPowerFrom ?? 0, powerTo: ratedPowerTo ?? Number.MAX_VALUE };
  if (tag !== undefined) values.tag = tag;
  if (articleNumber !== undefined) values.articleNumber = articleNumber;
  for (const [index, word] of words.entries()) {
    values[`word${index}`] = word;
    // above every word that begins so: U+10FFFF is no character of any word
    values[`word${index}End`] = `${word}\u{10ffff}`;
  }
  return values;
}

/** The statement that gives candidates in the order of ids: of an index that has that order, or of few enough hits to sort. */
function walkFor(prepare: Prepare, filter: EntryFilter, values: Values): string {
  const inOrder = 'AND id > @after ORDER BY id';
  if (filter.articleNumber !== undefined) {
    return `SELECT id FROM entries WHERE kind = @kind AND article_number = @articleNumber AND deleted_at IS NULL ${inOrder}`;
  }
  if (filter.tag !== undefined) return `SELECT id FROM entry_tags WHERE kind = @kind AND tag = @tag ${inOrder}`;

  const hitsOf = (hits: string) =>
    prepare<{ hits: number }>(`SELECT count(*) AS hits FROM (SELECT 1 ${hits} LIMIT ${FEW + 1})`).get(values)?.hits ?? 0;
  const power = `FROM entries INDEXED BY entries_by_rated_power WHERE kind = @kind AND ${POWER_RANGE} AND deleted_at IS NULL`;
  const ways = [
    ...filter.words.map((_, index) => `FROM entry_words WHERE kind = @kind AND ${WORD_RANGE(index)}`),
    ...(filtersPower(filter) ? [power] : []),
  ].map((from) => ({ from, hits: hitsOf(from) }));
  const fewest = ways.toSorted((a, b) => a.hits - b.hits)[0];
  if (fewest !== undefined && fewest.hits <= FEW) return `SELECT DISTINCT id ${fewest.from} ${inOrder}`;
  return `SELECT id FROM entries WHERE kind = @kind AND deleted_at IS NULL ${inOrder}`;
}

/** The statement that gives the heading of one entry where every filter lets it through. */
function checkFor(filter: EntryFilter): string {
  const conditions = [
    'e.kind = @kind AND e.id = @id AND e.deleted_at IS NULL',
    ...(filter.articleNumber === undefined ? [] : ['e.article_number = @articleNumber']),
    ...(filter.tag === undefined ? [] : ['EXISTS (SELECT 1 FROM entry_tags WHERE kind = e.kind AND tag = @tag AND id = e.id)']),
    ...filter.words.map((_, index) => `EXISTS (SELECT 1 FROM entry_words WHERE kind = e.kind AND id = e.id AND ${WORD_RANGE(index)})`),
    ...(filtersPower(filter) ? [POWER_RANGE] : []),
  ];
  const tags = '(SELECT json_group_array(tag) FROM entry_tags WHERE kind = e.kind AND id = e.id)';
  return `SELECT e.id, e.revision, e.name, e.article_number, e.rated_power, ${tags} AS tags, e.revised_at
    FROM entries e WHERE ${conditions.join(' AND ')}`;
}

function filtersPower({ ratedPowerFrom, ratedPowerTo }: EntryFilter): boolean {
  return ratedPowerFrom !== undefined || ratedPowerTo !== undefined;
}
