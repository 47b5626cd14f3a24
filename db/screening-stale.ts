/**
 * Finds what is to be screened again: pairs of entries whose plain verdict judged what the catalogue no longer says, and that have no
 * fresh one for the same count and mains. Freezes them as the pairings of a listed screening.
 */
import type { RecordDatabase } from './record.ts';

/** V r.m.s. and Hz */
export interface StaleMains {
  readonly voltage: number;
  readonly frequency: number;
}

export interface StalePairs {
  /** Every mains at which there is something to be screened again. */
  mains(): readonly StaleMains[];
  /** Freezes the pairs of a mains, each entry with its latest revision; how many there are of each. */
  freeze(screening: number, mains: StaleMains): { readonly lamps: number; readonly dimmers: number; readonly total: number };
}

// `created_at >= 0` always holds; with it the partial index of stale rows is searched by its first column.
const STALE = `judged_pairs p JOIN verdicts v ON v.seq = p.verdict
  JOIN entries d ON d.seq = p.dimmer JOIN entries l ON l.seq = p.lamp
  WHERE p.stale = 1 AND p.created_at >= 0 AND p.plain = 1 AND d.deleted_at IS NULL AND l.deleted_at IS NULL
    AND NOT EXISTS (SELECT 1 FROM judged_pairs f JOIN verdicts fv ON fv.seq = f.verdict
      WHERE f.dimmer = p.dimmer AND f.lamp = p.lamp AND f.lamp_count = p.lamp_count AND f.plain = 1 AND f.stale = 0
        AND fv.mains_voltage = v.mains_voltage AND fv.mains_frequency = v.mains_frequency)`;
const AT_MAINS = `${STALE} AND v.mains_voltage = @voltage AND v.mains_frequency = @frequency`;

export function stalePairs(record: RecordDatabase): StalePairs {
  const mains = record.prepare<[], StaleMains>(
    `SELECT DISTINCT v.mains_voltage AS voltage, v.mains_frequency AS frequency FROM ${STALE} ORDER BY voltage, frequency`,
  );
  const insertEntries = record.prepare(
    `INSERT INTO screening_entries (screening, kind, place, entry, revision)
     SELECT @screening, @kind, row_number() OVER (ORDER BY e.id) - 1, e.seq, e.revision FROM entries e
     WHERE e.seq IN (SELECT CASE @kind WHEN 'lamp' THEN p.lamp ELSE p.dimmer END FROM ${AT_MAINS})`,
  );
  const insertPairs = record.prepare(
    `INSERT INTO screening_pairs (screening, position, lamp, dimmer, count)
     SELECT @screening, row_number() OVER (ORDER BY lp.place, dp.place, lamp_count) - 1, lp.place, dp.place, lamp_count
     FROM (SELECT DISTINCT p.lamp, p.dimmer, p.lamp_count FROM ${AT_MAINS})
     JOIN screening_entries lp ON lp.screening = @screening AND lp.kind = 'lamp' AND lp.entry = lamp
     JOIN screening_entries dp ON dp.screening = @screening AND dp.kind = 'dimmer' AND dp.entry = dimmer`,
  );
  return {
    mains: () => mains.all(),
    freeze: (screening, at) => ({
      lamps: insertEntries.run({ screening, kind: 'lamp', ...at }).changes,
      dimmers: insertEntries.run({ screening, kind: 'dimmer', ...at }).changes,
      total: insertPairs.run({ screening, ...at }).changes,
    }),
  };
}
