/**
 * Lists what was judged to go with an entry: the dimmers of a lamp, or the lamps of a dimmer, newest verdict first. Of several verdicts
 * of the same pair, count and mains the newest that still holds speaks; the others are passed over. Pages end as those of
 * verdict-search.ts do.
 */
import type { Grade } from '../model/index.ts';
import type { EntryKind } from './entries.ts';
import { preparedOnce } from './prepared-statements.ts';
import type { RecordDatabase } from './record.ts';

export interface PartnerFilter {
  readonly grades: readonly Grade[];
  readonly lampCount?: number | undefined;
  /** V and Hz, exactly */
  readonly mainsVoltage?: number | undefined;
  readonly mainsFrequency?: number | undefined;
}

/** Where a tie stands in the order of the list. */
export interface PartnerPlace {
  readonly created_at: number;
  readonly verdict: number;
  readonly seq: number;
}

export interface PartnerRow extends PartnerPlace {
  /** of the partner */
  readonly partner_id: string;
  readonly partner_name: string | null;
  readonly dimmer_revision: number;
  readonly lamp_revision: number;
  readonly lamp_count: number;
  readonly verdict_id: string;
  readonly model_version: string;
  readonly grade: Grade;
  readonly summary: string;
  readonly mains_voltage: number;
  readonly mains_frequency: number;
}

export interface PartnerPage {
  readonly partners: readonly PartnerRow[];
  readonly next: PartnerPlace | undefined;
}

export interface PartnerSearch {
  /** The partners of the entry `id` of that kind, below `before`. */
  page(kind: EntryKind, id: string, filter: PartnerFilter, before: PartnerPlace, limit: number): PartnerPage;
}

export const NEWEST_PARTNER: PartnerPlace = {
  created_at: Number.MAX_SAFE_INTEGER,
  verdict: Number.MAX_SAFE_INTEGER,
  seq: Number.MAX_SAFE_INTEGER,
};

/** rows looked at for one page; each takes a look for a newer one as well */
const MOST_LOOKED_AT = 1_000;

const HELD = (pair: string) => `${pair}.plain = 1 AND ${pair}.stale = 0`;
const NEWER = `EXISTS (SELECT 1 FROM judged_pairs n CROSS JOIN verdicts w ON w.seq = n.verdict
  WHERE n.dimmer = p.dimmer AND n.lamp = p.lamp AND (n.created_at, n.verdict) >= (p.created_at, p.verdict)
    AND (n.verdict <> p.verdict OR n.seq > p.seq) AND ${HELD('n')} AND n.lamp_count = p.lamp_count
    AND w.mains_voltage = v.mains_voltage AND w.mains_frequency = v.mains_frequency)`;

const CHECKS = [
  ['mainsVoltage', 'v.mains_voltage = @mainsVoltage'],
  ['mainsFrequency', 'v.mains_frequency = @mainsFrequency'],
] as const satisfies readonly (readonly [keyof PartnerFilter, string])[];

const PARTNER_OF = { lamp: 'dimmer', dimmer: 'lamp' } as const;

export function partnerSearch(record: RecordDatabase): PartnerSearch {
  const prepare = preparedOnce(record);
  const rowsWith = (side: EntryKind) =>
    record.prepare<[number], PartnerRow>(
      `SELECT p.created_at, p.verdict, p.seq, e.id AS partner_id, e.name AS partner_name, p.dimmer_revision, p.lamp_revision,
         p.lamp_count, v.id AS verdict_id, v.model_version, v.grade, v.summary, v.mains_voltage, v.mains_frequency
       FROM judged_pairs p CROSS JOIN verdicts v ON v.seq = p.verdict CROSS JOIN entries e ON e.seq = p.${side} WHERE p.seq = ?`,
    );
  const rows = { dimmer: rowsWith('dimmer'), lamp: rowsWith('lamp') };

  return {
    page: (kind, id, filter, before, limit) => {
      const grades = filter.grades.map((grade, index) => [`grade${index}`, grade]);
      const { created_at: at, verdict, seq } = before;
      const values = { ...filter, ...Object.fromEntries(grades), id, at, verdict, seq };
      const partners: PartnerRow[] = [];
      let last = before;
      let lookedAt = 0;
      for (const { hit, ...place } of prepare<PartnerPlace & { hit: 0 | 1 }>(walkText(kind, filter)).iterate(values)) {
        if (partners.length === limit || lookedAt === MOST_LOOKED_AT) return { partners, next: last };
        lookedAt += 1;
        last = place;
        const found = hit === 1 ? rows[PARTNER_OF[kind]].get(place.seq) : undefined;
        if (found !== undefined) partners.push(found);
      }
      return { partners, next: undefined };
    },
  };
}

function walkText(kind: EntryKind, filter: PartnerFilter): string {
  const ofVerdict = [
    `v.grade IN (${filter.grades.map((_, index) => `@grade${index}`).join(', ')})`,
    ...CHECKS.flatMap(([field, check]) => (filter[field] === undefined ? [] : [check])),
    `NOT ${NEWER}`,
  ].join(' AND ');
  const ofPair = [...(filter.lampCount === undefined ? [] : ['p.lamp_count = @lampCount']), 'p.plain = 1', 'p.stale = 0'];
  // AND would evaluate both its sides; a CASE reads no row where the index says enough, and no verdict where the pair does not hold.
  return `SELECT p.created_at, p.verdict, p.seq,
      ${ofPair.reduceRight((rest, check) => `CASE WHEN ${check} THEN ${rest} ELSE 0 END`, `(SELECT ${ofVerdict} FROM verdicts v WHERE v.seq = p.verdict)`)} AS hit
    FROM judged_pairs p
    WHERE p.${kind} = (SELECT seq FROM entries WHERE kind = '${kind}' AND id = @id)
      AND (p.created_at, p.verdict, p.seq) < (@at, @verdict, @seq)
    ORDER BY p.created_at DESC, p.verdict DESC, p.seq DESC`;
}
