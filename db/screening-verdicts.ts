/** What a screening reads of stored verdicts, by the number that its pages hold. */
import type { Grade } from '../model/index.ts';
import type { RecordDatabase } from './record.ts';

export interface ScreenedVerdict {
  readonly seq: number;
  readonly id: string;
  readonly grade: Grade;
  readonly summary: string;
}

export interface ScreeningVerdicts {
  /** `fingerprint` in hexadecimal */
  seqOf(fingerprint: string): number | undefined;
  bySeq(seqs: readonly number[]): ReadonlyMap<number, ScreenedVerdict>;
}

export function screeningVerdicts(record: RecordDatabase): ScreeningVerdicts {
  const seqOf = record.prepare<[Buffer], number>('SELECT seq FROM verdicts WHERE fingerprint = ?').pluck();
  const bySeq = record.prepare<[string], ScreenedVerdict>(
    'SELECT v.seq, v.id, v.grade, v.summary FROM json_each(?) j JOIN verdicts v ON v.seq = j.value',
  );
  return {
    seqOf: (fingerprint) => seqOf.get(Buffer.from(fingerprint, 'hex')),
    bySeq: (seqs) => new Map(bySeq.all(JSON.stringify(seqs)).map((verdict) => [verdict.seq, verdict])),
  };
}
