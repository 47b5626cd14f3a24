/**
 * The statements over stored verdicts: insert once, find, and page newest first. Rows go in and out as they are stored; turning
 * their JSON into the service's answers is the server's.
 */
import type { Grade } from '../model/index.ts';
import type { RecordDatabase } from './record.ts';

export interface VerdictRow {
  readonly id: string;
  readonly fingerprint: string;
  readonly model_version: string;
  readonly created_at: string;
  readonly grade: Grade;
  readonly summary: string;
  readonly mains_voltage: number;
  readonly mains_frequency: number;
  readonly pairing: string;
  readonly assumptions: string;
  readonly judgement: string;
}

/** What a list shows: the columns, without the JSON. */
export type VerdictHeading = Pick<
  VerdictRow,
  'id' | 'model_version' | 'created_at' | 'grade' | 'summary' | 'mains_voltage' | 'mains_frequency'
> & { readonly seq: number };

export interface VerdictFilter {
  readonly grade?: Grade | undefined;
  readonly modelVersion?: string | undefined;
  readonly mainsVoltage?: number | undefined;
  readonly mainsFrequency?: number | undefined;
}

export interface VerdictStore {
  /** Stores the row unless its fingerprint is stored already; gives what is stored, and whether this call stored it. */
  insertOnce(row: VerdictRow): { readonly row: VerdictRow; readonly stored: boolean };
  findById(id: string): VerdictRow | undefined;
  findByFingerprint(fingerprint: string): VerdictRow | undefined;
  /** Up to `limit` headings with a `seq` below `before`, newest first. */
  page(filter: VerdictFilter, before: number, limit: number): readonly VerdictHeading[];
  count(): number;
}

const COLUMNS =
  'id, fingerprint, model_version, created_at, grade, summary, mains_voltage, mains_frequency, pairing, assumptions, judgement';
const HEADING_COLUMNS = 'seq, id, model_version, created_at, grade, summary, mains_voltage, mains_frequency';

/** The columns a list can be filtered by, with the filter's field. */
const FILTER_COLUMNS = [
  ['grade', 'grade'],
  ['modelVersion', 'model_version'],
  ['mainsVoltage', 'mains_voltage'],
  ['mainsFrequency', 'mains_frequency'],
] as const satisfies readonly (readonly [keyof VerdictFilter, string])[];

export function verdictStore(record: RecordDatabase): VerdictStore {
  const values = COLUMNS.split(', ').map((column) => `@${column}`);
  const insert = record.prepare(`INSERT INTO verdicts (${COLUMNS}) VALUES (${values.join(', ')}) ON CONFLICT (fingerprint) DO NOTHING`);
  const byId = record.prepare<[string], VerdictRow>(`SELECT ${COLUMNS} FROM verdicts WHERE id = ?`);
  const byFingerprint = record.prepare<[string], VerdictRow>(`SELECT ${COLUMNS} FROM verdicts WHERE fingerprint = ?`);
  const countAll = record.prepare<[], number>('SELECT count(*) FROM verdicts').pluck();

  const insertOnce = record.transaction((row: VerdictRow) => {
    const stored = insert.run(row).changes === 1;
    const kept = byFingerprint.get(row.fingerprint);
    if (kept === undefined) throw new Error(`Verdict ${row.id} was neither stored nor found.`);
    return { row: kept, stored };
  });

  return {
    insertOnce: (row) => insertOnce.immediate(row),
    findById: (id) => byId.get(id),
    findByFingerprint: (fingerprint) => byFingerprint.get(fingerprint),
    page: (filter, before, limit) => {
      const wanted = FILTER_COLUMNS.filter(([field]) => filter[field] !== undefined);
      const conditions = ['seq < @before', ...wanted.map(([field, column]) => `${column} = @${field}`)];
      return record
        .prepare<[object], VerdictHeading>(
          `SELECT ${HEADING_COLUMNS} FROM verdicts WHERE ${conditions.join(' AND ')} ORDER BY seq DESC LIMIT @limit`,
        )
        .all({ ...filter, before, limit });
    },
    count: () => countAll.get() ?? 0,
  };
}
