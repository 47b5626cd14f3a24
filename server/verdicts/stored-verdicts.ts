/** Reads stored verdicts back: one whole, or a page of headings with the cursor to the next. */
import type { VerdictHeading as HeadingRow, VerdictRow, VerdictStore } from '../../db/verdicts.ts';
import type { Judgement } from '../../model/index.ts';
import type { JudgedPairing } from '../schemas/pairing.ts';
import { DEFAULT_LIMIT } from '../schemas/url-values.ts';
import type { Verdict, VerdictHeading } from '../schemas/verdict.ts';
import type { VerdictListQuery } from '../schemas/verdict-calls.ts';
import { verdictToWire } from './judgement-to-wire.ts';
import type { Assumption } from './pairing-completion.ts';

const CURSOR = /^before-([1-9]\d{0,14})$/;

export function storedPairing(row: VerdictRow): JudgedPairing {
  return JSON.parse(row.pairing) as JudgedPairing;
}

export function storedVerdict(row: VerdictRow): Verdict {
  return verdictToWire({
    id: row.id,
    modelVersion: row.model_version,
    createdAt: row.created_at,
    pairing: storedPairing(row),
    assumptions: JSON.parse(row.assumptions) as Assumption[],
    judgement: JSON.parse(row.judgement) as Judgement,
  });
}

export type VerdictPage =
  | { readonly ok: true; readonly items: VerdictHeading[]; readonly nextCursor: string | null }
  | { readonly ok: false; readonly failure: { readonly kind: 'bad-cursor' } };

export function verdictPage(verdicts: VerdictStore, query: VerdictListQuery): VerdictPage {
  const before = query.cursor === undefined ? Number.MAX_SAFE_INTEGER : readCursor(query.cursor);
  if (before === undefined) return { ok: false, failure: { kind: 'bad-cursor' } };
  const filter = {
    grade: query.grade,
    modelVersion: query.modelVersion,
    mainsVoltage: query.mainsVoltage_V,
    mainsFrequency: query.mainsFrequency_Hz,
  };
  const limit = query.limit ?? DEFAULT_LIMIT;
  // One more than asked for tells whether there is a next page.
  const rows = verdicts.page(filter, before, limit + 1);
  const shown = rows.slice(0, limit);
  const last = shown.at(-1);
  return {
    ok: true,
    items: shown.map(headingToWire),
    nextCursor: rows.length > limit && last !== undefined ? writeCursor(last.seq) : null,
  };
}

function headingToWire(row: HeadingRow): VerdictHeading {
  return {
    id: row.id,
    modelVersion: row.model_version,
    createdAt: row.created_at,
    grade: row.grade,
    summary: row.summary,
    mains: { voltage_V: row.mains_voltage, frequency_Hz: row.mains_frequency },
  };
}

/** Opaque to clients, so that what a page is keyed by can change. */
function writeCursor(seq: number): string {
  return Buffer.from(`before-${seq}`).toString('base64url');
}

function readCursor(cursor: string): number | undefined {
  const [, digits] = CURSOR.exec(Buffer.from(cursor, 'base64url').toString('latin1')) ?? [];
  // Decoding is lenient; only what encodes back to the same text was written here.
  return digits !== undefined && writeCursor(Number(digits)) === cursor ? Number(digits) : undefined;
}
