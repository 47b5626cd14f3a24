/** The statements over stored requirements: find, and insert once. Turning their JSON into answers is the server's. */
import type { RecordDatabase } from './record.ts';

export interface RequirementRow {
  /** id of the verdict */
  readonly verdict_id: string;
  readonly model_version: string;
  /** ISO 8601 */
  readonly created_at: string;
  readonly content: string;
}

export interface RequirementStore {
  find(verdictId: string, modelVersion: string): RequirementRow | undefined;
  /** Stores the row unless there is one of its verdict and model version; gives what is stored. */
  insertOnce(row: RequirementRow): RequirementRow;
}

interface Stored extends Omit<RequirementRow, 'created_at'> {
  readonly created_at: number;
}

export function requirementStore(record: RecordDatabase): RequirementStore {
  const select = record.prepare<[string, string], Stored>(
    `SELECT id AS verdict_id, requirements.model_version, requirements.created_at, content
    FROM verdicts JOIN requirements ON verdict = seq WHERE id = ? AND requirements.model_version = ?`,
  );
  const insert = record.prepare(
    `INSERT INTO requirements (verdict, model_version, created_at, content)
    SELECT seq, @model_version, @created_at, @content FROM verdicts WHERE id = @verdict_id
    ON CONFLICT (verdict, model_version) DO NOTHING`,
  );
  const find = (verdictId: string, modelVersion: string): RequirementRow | undefined => {
    const stored = select.get(verdictId, modelVersion);
    return stored === undefined ? undefined : { ...stored, created_at: new Date(stored.created_at).toISOString() };
  };
  const insertOnce = record.transaction((row: RequirementRow) => {
    insert.run({ ...row, created_at: Date.parse(row.created_at) });
    const kept = find(row.verdict_id, row.model_version);
    if (kept === undefined) throw new Error(`The requirement of verdict ${row.verdict_id} was neither stored nor found.`);
    return kept;
  });
  return { find, insertOnce: (row) => insertOnce.immediate(row) };
}
