/**
 * The statements over stored verdicts: insert once, and find. Lists of them are verdict-search.ts. Rows go in and out with their JSON;
 * turning it into the service's answers is the server's, how it lies on the disk is evidence.ts's.
 */
import type { Grade } from '../model/index.ts';
import { type Evidence, readEvidence, type WrittenEvidence, writeEvidence } from './evidence.ts';
import type { RecordDatabase } from './record.ts';

export interface VerdictRow extends Evidence {
  readonly id: string;
  /** hexadecimal */
  readonly fingerprint: string;
  readonly model_version: string;
  /** ISO 8601 */
  readonly created_at: string;
  readonly grade: Grade;
  readonly summary: string;
  readonly mains_voltage: number;
  readonly mains_frequency: number;
  readonly lamp_count: number;
}

export interface VerdictStore {
  /** Stores the row unless its fingerprint is stored already; gives what is stored, and whether this call stored it. */
  insertOnce(row: VerdictRow): { readonly row: VerdictRow; readonly stored: boolean };
  findById(id: string): VerdictRow | undefined;
  findByFingerprint(fingerprint: string): VerdictRow | undefined;
  count(): number;
}

interface Stored extends Omit<VerdictRow, 'fingerprint' | 'created_at' | keyof Evidence>, WrittenEvidence {
  readonly fingerprint: Buffer;
  readonly created_at: number;
}

const COLUMNS = 'id, fingerprint, model_version, created_at, grade, summary, mains_voltage, mains_frequency, lamp_count';
const STORED = `SELECT ${COLUMNS}, encoding, content FROM verdicts JOIN evidence ON verdict = seq`;

export function verdictStore(record: RecordDatabase): VerdictStore {
  const values = COLUMNS.split(', ').map((column) => `@${column}`);
  const insert = record.prepare(`INSERT INTO verdicts (${COLUMNS}) VALUES (${values.join(', ')})`);
  const insertEvidence = record.prepare('INSERT INTO evidence (verdict, encoding, content) VALUES (@verdict, @encoding, @content)');
  const byId = record.prepare<[string], Stored>(`${STORED} WHERE id = ?`);
  const byFingerprint = record.prepare<[Buffer], Stored>(`${STORED} WHERE fingerprint = ?`);
  // Rows are never taken out and numbers never left out, so the last number is how many there are; counting would read them all.
  const last = record.prepare<[], number | null>('SELECT max(seq) FROM verdicts').pluck();
  const findByFingerprint = (fingerprint: string) => rowOf(byFingerprint.get(Buffer.from(fingerprint, 'hex')));

  const insertOnce = record.transaction((row: VerdictRow) => {
    // Asked first rather than left to the constraint, which would leave a number out.
    const known = findByFingerprint(row.fingerprint);
    if (known !== undefined) return { row: known, stored: false };
    const { fingerprint, created_at, pairing, assumptions, judgement, ...columns } = row;
    const binary = { fingerprint: Buffer.from(fingerprint, 'hex'), created_at: Date.parse(created_at) };
    const { lastInsertRowid } = insert.run({ ...columns, ...binary });
    insertEvidence.run({ verdict: lastInsertRowid, ...writeEvidence({ pairing, assumptions, judgement }) });
    const kept = findByFingerprint(fingerprint);
    if (kept === undefined) throw new Error(`Verdict ${row.id} was stored and not found.`);
    return { row: kept, stored: true };
  });

  return {
    insertOnce: (row) => insertOnce.immediate(row),
    findById: (id) => rowOf(byId.get(id)),
    findByFingerprint,
    count: () => last.get() ?? 0,
  };
}

function rowOf(stored: Stored | undefined): VerdictRow | undefined {
  if (stored === undefined) return undefined;
  const { encoding, content, fingerprint, created_at, ...columns } = stored;
  return {
    ...columns,
    fingerprint: fingerprint.toString('hex'),
    created_at: new Date(created_at).toISOString(),
    ...readEvidence({ encoding, content }),
  };
}
