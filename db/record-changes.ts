/** How many rows this connection has changed since it was opened: the same number means that nothing was written through it. */
import type { RecordDatabase } from './record.ts';

export type RecordChanges = () => number;

/** Reads no file and takes no lock, so it costs a fraction of the shortest query. */
export function recordChanges(record: RecordDatabase): RecordChanges {
  const changes = record.prepare<[], number>('SELECT total_changes()').pluck();
  return () => changes.get() ?? 0;
}
