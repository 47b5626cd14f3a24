/** Pages of stored verdicts, newest first, as items of a list; the cursor says where the next one begins. */
import type { JudgedPairRow, JudgedPairs } from '../../db/judged-pairs.ts';
import { type VerdictHeading as HeadingRow, NEWEST, type VerdictPlace, type VerdictSearch } from '../../db/verdict-search.ts';
import type { VerdictStore } from '../../db/verdicts.ts';
import { DEFAULT_LIMIT } from '../schemas/url-values.ts';
import type { JudgedFor, VerdictHeading, VerdictListItem, VerdictListQuery } from '../schemas/verdict-list.ts';
import { chosenFields, storedVerdict } from './stored-verdicts.ts';

export interface ListDependencies {
  readonly verdicts: VerdictStore;
  readonly verdictSearch: VerdictSearch;
  readonly judgedPairs: JudgedPairs;
}

export type ListPage<Item> =
  | { readonly ok: true; readonly items: Item[]; readonly nextCursor: string | null }
  | { readonly ok: false; readonly failure: { readonly kind: 'bad-cursor' } };

/** ties shown of one verdict; each of thousands of equal lamps may have asked for it */
const MOST_TIES = 20;

export function headingPage(dependencies: ListDependencies, query: VerdictListQuery): ListPage<VerdictHeading> {
  const before = query.cursor === undefined ? NEWEST : readCursor(query.cursor);
  if (before === undefined) return { ok: false, failure: { kind: 'bad-cursor' } };
  const filter = {
    grade: query.grade,
    modelVersion: query.modelVersion,
    mainsVoltage: query.mainsVoltage_V,
    mainsFrequency: query.mainsFrequency_Hz,
    lampCount: query.count,
    createdFrom: query.createdFrom,
    createdBefore: query.createdBefore,
    dimmerId: query.dimmerId,
    lampId: query.lampId,
    stale: query.stale,
  };
  const { headings, next } = dependencies.verdictSearch.page(filter, before, query.limit ?? DEFAULT_LIMIT);
  const items = headings.map((row) => headingToWire(row, dependencies.judgedPairs.ofVerdict(row.seq, MOST_TIES)));
  return { ok: true, items, nextCursor: next === undefined ? null : writeCursor(next) };
}

/** A heading where no fields are asked for; the evidence is read only where one of them needs it. */
export function verdictPage(dependencies: ListDependencies, query: VerdictListQuery): ListPage<VerdictListItem> {
  const page = headingPage(dependencies, query);
  const { fields } = query;
  if (!page.ok || fields === undefined) return page;
  const items = page.items.map((heading) => {
    if (fields.every((field) => field in heading)) return chosenFields<VerdictListItem, keyof VerdictListItem>(heading, fields);
    const row = dependencies.verdicts.findById(heading.id);
    if (row === undefined) throw new Error(`Verdict ${heading.id} was listed and not found.`);
    return chosenFields<VerdictListItem, keyof VerdictListItem>({ ...storedVerdict(row), ...heading }, fields);
  });
  return { ...page, items };
}

function headingToWire(row: HeadingRow, ties: readonly JudgedPairRow[]): VerdictHeading {
  return {
    id: row.id,
    modelVersion: row.model_version,
    createdAt: new Date(row.created_at).toISOString(),
    grade: row.grade,
    summary: row.summary,
    mains: { voltage_V: row.mains_voltage, frequency_Hz: row.mains_frequency },
    count: row.lamp_count,
    judgedFor: ties.map(tieToWire),
  };
}

function tieToWire(tie: JudgedPairRow): JudgedFor {
  return {
    dimmerId: tie.dimmer_id,
    dimmerRevision: tie.dimmer_revision,
    lampId: tie.lamp_id,
    lampRevision: tie.lamp_revision,
    count: tie.lamp_count,
    stale: tie.stale === 1,
  };
}

const CURSOR = /^before-([1-9]\d{0,15})-([1-9]\d{0,15})$/;

/** Opaque to clients, so that what a page is keyed by can change. */
function writeCursor({ created_at, seq }: VerdictPlace): string {
  return Buffer.from(`before-${created_at}-${seq}`).toString('base64url');
}

function readCursor(cursor: string): VerdictPlace | undefined {
  const [, at, seq] = CURSOR.exec(Buffer.from(cursor, 'base64url').toString('latin1')) ?? [];
  if (at === undefined || seq === undefined) return undefined;
  const place = { created_at: Number(at), seq: Number(seq) };
  // Decoding is lenient; only what encodes back to the same text was written here.
  return writeCursor(place) === cursor ? place : undefined;
}
