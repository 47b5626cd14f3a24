/**
 * Ties verdicts to the revisions of the catalogue entries that they judged, and marks those stale whose dimmer or lamps are edited or
 * deleted. A verdict stays what it is; whether it still speaks of what the catalogue says now is kept here.
 */
import type { Grade } from '../model/index.ts';
import type { RecordDatabase } from './record.ts';

/** One revision of an entry. */
export interface JudgedEntry {
  readonly id: string;
  readonly revision: number;
}

export interface JudgedGroup {
  /** undefined where the lamp was given in full */
  readonly lamp: JudgedEntry | undefined;
  readonly count: number;
}

/** What of a circuit came from the catalogue. */
export interface JudgedCircuit {
  readonly dimmer: JudgedEntry | undefined;
  readonly groups: readonly JudgedGroup[];
  /** whether the pair stands for itself: one group, nothing added, judged no less strictly than by default */
  readonly plain: boolean;
}

/** A tie as lists show it. */
export interface JudgedPairRow {
  readonly dimmer_id: string | null;
  readonly dimmer_revision: number | null;
  readonly lamp_id: string | null;
  readonly lamp_revision: number | null;
  readonly lamp_count: number;
  readonly plain: 0 | 1;
  readonly stale: 0 | 1;
}

/** A plain pair's verdict, as badge and look-up need it. */
export interface PairVerdictRow {
  readonly id: string;
  readonly model_version: string;
  readonly created_at: number;
  readonly grade: Grade;
  readonly summary: string;
  readonly mains_voltage: number;
  readonly mains_frequency: number;
  readonly lamp_count: number;
  readonly dimmer_revision: number;
  readonly lamp_revision: number;
  readonly stale: 0 | 1;
}

/** V and Hz, exactly */
export interface PairMains {
  readonly voltage: number;
  readonly frequency: number;
}

export interface JudgedPairs {
  /** Ties a stored verdict to what it judged, once: the same tie again changes nothing. */
  tie(verdictId: string, circuit: JudgedCircuit): void;
  /**
   * Marks what an entry's edit or deletion makes stale, or fresh again where `returns`: its circuit is one that it had before. Inside the
   * transaction that edits it.
   */
  markStale(entry: number, returns: boolean): void;
  /** A verdict's ties, first made first, at most `limit`. */
  ofVerdict(verdict: number, limit: number): readonly JudgedPairRow[];
  /** Of the verdicts of two entries for each other at a count the newest that holds, else the newest of earlier revisions. */
  newestOfPair(dimmerId: string, lampId: string, count: number, mains?: PairMains): PairVerdictRow | undefined;
  /** A text that changes with whatever `ofPair` depends on; undefined where either entry is not there. */
  stampOf(dimmerId: string, lampId: string): string | undefined;
  /** The verdicts of two entries for each other, newest first, at most `limit`. */
  ofPair(dimmerId: string, lampId: string, limit: number): readonly PairVerdictRow[];
}

interface Part {
  readonly dimmer: number | null;
  readonly dimmer_revision: number | null;
  readonly lamp: number | null;
  readonly lamp_revision: number | null;
  readonly lamp_count: number;
}

/** Whether what a row of the alias `part` judged is no longer what the catalogue says. A deleted entry has no circuit. */
const differs = (entry: 'dimmer' | 'lamp') =>
  `(part.${entry} IS NOT NULL AND (SELECT circuit FROM entries WHERE seq = part.${entry}) IS NOT
    (SELECT circuit FROM revisions WHERE entry = part.${entry} AND revision = part.${entry}_revision))`;
const OUTDATED = `EXISTS (SELECT 1 FROM judged_pairs part
  WHERE part.circuit_row = judged_pairs.circuit_row AND (${differs('dimmer')} OR ${differs('lamp')}))`;

const OF_PAIR = `SELECT v.id, v.model_version, v.created_at, v.grade, v.summary, v.mains_voltage, v.mains_frequency, p.lamp_count,
    p.dimmer_revision, p.lamp_revision, p.stale
  FROM judged_pairs p CROSS JOIN verdicts v ON v.seq = p.verdict
  WHERE p.dimmer = (SELECT seq FROM entries WHERE kind = 'dimmer' AND id = @dimmerId)
    AND p.lamp = (SELECT seq FROM entries WHERE kind = 'lamp' AND id = @lampId) AND p.plain = 1`;

export function judgedPairs(record: RecordDatabase): JudgedPairs {
  const verdictOf = record.prepare<[string], { seq: number; created_at: number }>('SELECT seq, created_at FROM verdicts WHERE id = ?');
  const entryOf = record.prepare<[string, string], number>('SELECT seq FROM entries WHERE kind = ? AND id = ?').pluck();
  const insert = record.prepare(
    `INSERT INTO judged_pairs (verdict, created_at, circuit_row, dimmer, dimmer_revision, lamp, lamp_revision, lamp_count, plain, stale)
     VALUES (@verdict, @created_at, @circuitRow, @dimmer, @dimmer_revision, @lamp, @lamp_revision, @lamp_count, @plain, 0)`,
  );
  const pointAtItself = record.prepare('UPDATE judged_pairs SET circuit_row = seq WHERE seq = ?');
  const sameFirstPart = record
    .prepare<[object], number>(
      `SELECT circuit_row FROM judged_pairs WHERE dimmer IS @dimmer AND lamp IS @lamp AND created_at = @created_at AND verdict = @verdict
       AND dimmer_revision IS @dimmer_revision AND lamp_revision IS @lamp_revision AND lamp_count = @lamp_count AND circuit_row = seq`,
    )
    .pluck();
  const partsOf = record.prepare<[number], Part>(
    'SELECT dimmer, dimmer_revision, lamp, lamp_revision, lamp_count FROM judged_pairs WHERE circuit_row = ? ORDER BY seq',
  );
  const markCircuit = record.prepare(`UPDATE judged_pairs SET stale = ${OUTDATED} WHERE circuit_row = ?`);
  const ofEntry =
    'circuit_row IN (SELECT circuit_row FROM judged_pairs WHERE dimmer = @entry UNION SELECT circuit_row FROM judged_pairs WHERE lamp = @entry)';
  const markAnew = record.prepare(`UPDATE judged_pairs SET stale = ${OUTDATED} WHERE ${ofEntry}`);
  const markAllStale = record.prepare(`UPDATE judged_pairs SET stale = 1 WHERE ${ofEntry} AND stale = 0`);
  const ofVerdict = record.prepare<[number, number], JudgedPairRow>(
    `SELECT d.id AS dimmer_id, dimmer_revision, l.id AS lamp_id, lamp_revision, lamp_count, plain, stale FROM judged_pairs p
     LEFT JOIN entries d ON d.seq = p.dimmer LEFT JOIN entries l ON l.seq = p.lamp WHERE p.verdict = ? ORDER BY p.seq LIMIT ?`,
  );
  const ofPair = record.prepare<[object], PairVerdictRow>(`${OF_PAIR} ORDER BY p.created_at DESC, p.verdict DESC LIMIT @limit`);
  const newest = (more: string) =>
    record.prepare<[object], PairVerdictRow>(
      `${OF_PAIR} AND p.lamp_count = @count ${more} ORDER BY p.stale, p.created_at DESC, p.verdict DESC LIMIT 1`,
    );
  const newestAtAny = newest('');
  const newestAt = newest('AND v.mains_voltage = @voltage AND v.mains_frequency = @frequency');
  const stampOf = record
    .prepare<[string, string], string>(
      `SELECT d.circuit || ' ' || l.circuit || ' ' ||
         coalesce((SELECT max(p.seq) FROM judged_pairs p WHERE p.dimmer = d.seq AND p.lamp = l.seq), 0)
       FROM entries d CROSS JOIN entries l
       WHERE d.kind = 'dimmer' AND d.id = ? AND d.deleted_at IS NULL AND l.kind = 'lamp' AND l.id = ? AND l.deleted_at IS NULL`,
    )
    .pluck();

  const partFor = (dimmer: JudgedEntry | undefined, { lamp, count }: JudgedGroup): Part => ({
    dimmer: dimmer === undefined ? null : seqOf('dimmer', dimmer.id),
    dimmer_revision: dimmer?.revision ?? null,
    lamp: lamp === undefined ? null : seqOf('lamp', lamp.id),
    lamp_revision: lamp?.revision ?? null,
    lamp_count: count,
  });
  const seqOf = (kind: 'dimmer' | 'lamp', id: string): number => {
    const seq = entryOf.get(kind, id);
    if (seq === undefined) throw new Error(`The ${kind} ${id} was judged but is not in the catalogue.`);
    return seq;
  };

  const tie = record.transaction((verdictId: string, { dimmer, groups, plain }: JudgedCircuit) => {
    const stored = verdictOf.get(verdictId);
    if (stored === undefined) throw new Error(`Verdict ${verdictId} is not stored.`);
    const verdict = { verdict: stored.seq, created_at: stored.created_at };
    const parts = groups.map((group) => partFor(dimmer, group)).filter((part) => part.dimmer !== null || part.lamp !== null);
    const [first] = parts;
    if (first === undefined) return;
    const known = sameFirstPart.all({ ...first, ...verdict });
    if (known.some((circuit) => JSON.stringify(partsOf.all(circuit)) === JSON.stringify(parts))) return;

    let circuitRow = 0;
    for (const part of parts) {
      const isPair = part.dimmer !== null && part.lamp !== null;
      const { lastInsertRowid } = insert.run({ ...part, ...verdict, circuitRow, plain: plain && isPair ? 1 : 0 });
      if (circuitRow !== 0) continue;
      circuitRow = Number(lastInsertRowid);
      pointAtItself.run(circuitRow);
    }
    // An entry may have been edited since it was read for judging.
    markCircuit.run(circuitRow);
  });

  return {
    tie: (verdictId, circuit) => tie.immediate(verdictId, circuit),
    markStale: (entry, returns) => void (returns ? markAnew : markAllStale).run({ entry }),
    ofVerdict: (verdict, limit) => ofVerdict.all(verdict, limit),
    stampOf: (dimmerId, lampId) => stampOf.get(dimmerId, lampId),
    ofPair: (dimmerId, lampId, limit) => ofPair.all({ dimmerId, lampId, limit }),
    newestOfPair: (dimmerId, lampId, count, mains) =>
      mains === undefined ? newestAtAny.get({ dimmerId, lampId, count }) : newestAt.get({ dimmerId, lampId, count, ...mains }),
  };
}
