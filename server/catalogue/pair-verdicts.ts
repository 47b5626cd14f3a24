/** The stored verdicts of pairs of the catalogue: which one speaks for a pair, and for many pairs at once. */
import type { EntryStore } from '../../db/entries.ts';
import type { JudgedPairs, PairVerdictRow } from '../../db/judged-pairs.ts';
import type { LookupItem, LookupRequest } from '../schemas/verdict-lookup.ts';

export interface PairDependencies {
  readonly entries: EntryStore;
  readonly judgedPairs: JudgedPairs;
}

/** verdicts of one pair that are looked at: counts, mains and model versions, the newest of them */
export const MOST_OF_PAIR = 500;

export interface Mains {
  readonly voltage_V: number;
  readonly frequency_Hz: number;
}

export function isAt(mains: Mains | undefined): (row: PairVerdictRow) => boolean {
  return (row) => mains === undefined || (row.mains_voltage === mains.voltage_V && row.mains_frequency === mains.frequency_Hz);
}

/** One answer for each pair, in their order. A verdict that still holds goes before a newer one of an earlier revision. */
export function lookUpVerdicts({ entries, judgedPairs }: PairDependencies, { pairs, mains }: LookupRequest): LookupItem[] {
  const at = mains === undefined ? undefined : { voltage: mains.voltage_V, frequency: mains.frequency_Hz };
  return pairs.map(({ dimmerId, lampId, count }) => {
    const asked = { dimmerId, lampId, count };
    const row = judgedPairs.newestOfPair(dimmerId, lampId, count, at);
    // What holds is of entries that are there.
    if (row?.stale === 0) return { ...asked, outcome: 'judged', verdict: verdictToWire(row) };
    if (!entries.has('dimmer', dimmerId)) return { ...asked, outcome: 'unknown-dimmer', verdict: null };
    if (!entries.has('lamp', lampId)) return { ...asked, outcome: 'unknown-lamp', verdict: null };
    return row === undefined
      ? { ...asked, outcome: 'not-screened', verdict: null }
      : { ...asked, outcome: 'stale', verdict: verdictToWire(row) };
  });
}

function verdictToWire(row: PairVerdictRow): NonNullable<LookupItem['verdict']> {
  return {
    id: row.id,
    modelVersion: row.model_version,
    createdAt: new Date(row.created_at).toISOString(),
    grade: row.grade,
    summary: row.summary,
    mains: { voltage_V: row.mains_voltage, frequency_Hz: row.mains_frequency },
    dimmerRevision: row.dimmer_revision,
    lampRevision: row.lamp_revision,
  };
}
