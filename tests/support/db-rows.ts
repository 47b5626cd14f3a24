/** Rows for tests of the record: verdicts by number, entries and ties by id. */
import type { JudgedPairs } from '../../db/judged-pairs.ts';
import type { Stores } from '../../db/stores.ts';
import type { VerdictRow } from '../../db/verdicts.ts';

/** ms; verdict n is computed n seconds later */
const FIRST = Date.parse('2026-03-02T08:00:00.000Z');

export function verdictRow(number: number, changes: Partial<VerdictRow> = {}): VerdictRow {
  const fingerprint = number.toString(16).padStart(8, '0').repeat(8);
  return {
    id: fingerprint.slice(0, 26),
    fingerprint,
    model_version: '1',
    created_at: new Date(FIRST + number * 1000).toISOString(),
    grade: 'suitable',
    summary: `Verdict ${number}.`,
    mains_voltage: 230,
    mains_frequency: 50,
    lamp_count: 1,
    pairing: '{}',
    assumptions: '[]',
    judgement: '{}',
    ...changes,
  };
}

/** Puts an entry whose circuit is `circuit`; the same id again makes a revision. */
export function putEntry(stores: Stores, kind: 'dimmer' | 'lamp', id: string, circuit = 'first', note = ''): void {
  const write = { kind, id, content: JSON.stringify({ circuit, note }), circuit, name: null, articleNumber: null, ratedPower: null };
  stores.entries.together(() => stores.entries.put({ ...write, tags: [], words: [] }, '2026-03-02T08:00:00.000Z'));
}

/** Stores verdict `number` and ties it to a plain pair. */
export function judgedPair(
  stores: Stores,
  number: number,
  dimmer: readonly [id: string, revision: number],
  lamp: readonly [id: string, revision: number],
  changes: Partial<VerdictRow> = {},
): VerdictRow {
  const { row } = stores.verdicts.insertOnce(verdictRow(number, changes));
  stores.judgedPairs.tie(row.id, plainCircuit(dimmer, lamp, row.lamp_count));
  return row;
}

export function plainCircuit(
  dimmer: readonly [string, number],
  lamp: readonly [string, number],
  count = 1,
): Parameters<JudgedPairs['tie']>[1] {
  return {
    dimmer: { id: dimmer[0], revision: dimmer[1] },
    groups: [{ lamp: { id: lamp[0], revision: lamp[1] }, count }],
    plain: true,
  };
}
