/** Lists what suits an entry: the dimmers of a lamp or the lamps of a dimmer, by verdicts that still hold. */
import type { EntryKind, EntryStore } from '../../db/entries.ts';
import { NEWEST_PARTNER, type PartnerPlace, type PartnerRow, type PartnerSearch } from '../../db/partner-search.ts';
import { DEFAULT_PARTNER_GRADES, type Partner, type PartnerQuery } from '../schemas/partner-calls.ts';
import { DEFAULT_LIMIT } from '../schemas/url-values.ts';

export type PartnerPage =
  | { readonly ok: true; readonly items: Partner[]; readonly nextCursor: string | null }
  | { readonly ok: false; readonly failure: { readonly kind: 'bad-cursor' | 'entry-not-found' } };

export interface PartnerDependencies {
  readonly entries: EntryStore;
  readonly partnerSearch: PartnerSearch;
}

export function partnerPage(
  { entries, partnerSearch }: PartnerDependencies,
  kind: EntryKind,
  id: string,
  query: PartnerQuery,
): PartnerPage {
  if (!entries.has(kind, id)) return { ok: false, failure: { kind: 'entry-not-found' } };
  const before = query.cursor === undefined ? NEWEST_PARTNER : readCursor(query.cursor);
  if (before === undefined) return { ok: false, failure: { kind: 'bad-cursor' } };
  const filter = {
    grades: query.grade ?? DEFAULT_PARTNER_GRADES,
    lampCount: query.count,
    mainsVoltage: query.mainsVoltage_V,
    mainsFrequency: query.mainsFrequency_Hz,
  };
  const { partners, next } = partnerSearch.page(kind, id, filter, before, query.limit ?? DEFAULT_LIMIT);
  return { ok: true, items: partners.map((row) => toWire(kind, id, row)), nextCursor: next === undefined ? null : writeCursor(next) };
}

function toWire(kind: EntryKind, id: string, row: PartnerRow): Partner {
  return {
    dimmerId: kind === 'dimmer' ? id : row.partner_id,
    dimmerRevision: row.dimmer_revision,
    lampId: kind === 'lamp' ? id : row.partner_id,
    lampRevision: row.lamp_revision,
    name: row.partner_name,
    count: row.lamp_count,
    mains: { voltage_V: row.mains_voltage, frequency_Hz: row.mains_frequency },
    grade: row.grade,
    summary: row.summary,
    verdictId: row.verdict_id,
    modelVersion: row.model_version,
    createdAt: new Date(row.created_at).toISOString(),
  };
}

const CURSOR = /^below-([1-9]\d{0,15})-([1-9]\d{0,15})-([1-9]\d{0,15})$/;

/** Opaque to clients, so that what a page is keyed by can change. */
function writeCursor({ created_at, verdict, seq }: PartnerPlace): string {
  return Buffer.from(`below-${created_at}-${verdict}-${seq}`).toString('base64url');
}

function readCursor(cursor: string): PartnerPlace | undefined {
  const [, at, verdict, seq] = CURSOR.exec(Buffer.from(cursor, 'base64url').toString('latin1')) ?? [];
  const place = { created_at: Number(at), verdict: Number(verdict), seq: Number(seq) };
  return at !== undefined && writeCursor(place) === cursor ? place : undefined;
}
