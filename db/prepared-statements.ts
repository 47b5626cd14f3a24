/** Statements whose text depends on which filters are given: each text is prepared once and kept. */
import type { Statement } from 'better-sqlite3';
import type { RecordDatabase } from './record.ts';

export type Prepare = <Row>(sql: string) => Statement<[object], Row>;

/** For texts made of a closed set of parts, never of values: the number of statements kept is bounded by that. */
export function preparedOnce(record: RecordDatabase): Prepare {
  const kept = new Map<string, Statement<[object], unknown>>();
  return <Row>(sql: string) => {
    const known = kept.get(sql) ?? record.prepare<[object], unknown>(sql);
    kept.set(sql, known);
    return known as Statement<[object], Row>;
  };
}
