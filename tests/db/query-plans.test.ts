import { describe, expect, it } from 'vitest';
import type { EntryFilter } from '../../db/entry-search.ts';
import type { RecordDatabase } from '../../db/record.ts';
import { type Stores, storesOf } from '../../db/stores.ts';
import { NEWEST, type VerdictFilter } from '../../db/verdict-search.ts';
import { judgedPair, putEntry, verdictRow } from '../support/db-rows.ts';
import { temporaryRecord } from '../support/server-temporary-record.ts';

interface Step {
  readonly detail: string;
}

/** Every statement that `act` prepares. */
function statementsOf(record: RecordDatabase, act: (watched: RecordDatabase) => void): readonly string[] {
  const seen = new Set<string>();
  const watched = new Proxy(record, {
    get: (target, name) => {
      if (name === 'prepare') {
        return (sql: string) => {
          seen.add(sql);
          return target.prepare(sql);
        };
      }
      const value = Reflect.get(target, name) as unknown;
      return typeof value === 'function' ? value.bind(target) : value;
    },
  });
  act(watched);
  return [...seen];
}

function planOf(record: RecordDatabase, sql: string): readonly string[] {
  const named = Object.fromEntries([...sql.matchAll(/@(\w+)/g)].map(([, name = '']) => [name, 1]));
  const unnamed = Array.from({ length: sql.split('?').length - 1 }, () => 1);
  const statement = record.prepare<unknown[], Step>(`EXPLAIN QUERY PLAN ${sql}`);
  return (unnamed.length > 0 ? statement.all(...unnamed) : statement.all(named)).map(({ detail }) => detail);
}

/**
 * Steps that read a table or an index from end to end. What a step makes for itself, `(subquery-1)`, is bounded by what made it, and a
 * virtual table is a list that was given as a parameter.
 */
function scansIn(plan: readonly string[]): readonly string[] {
  return plan.filter((detail) => /^SCAN (?!\(|CONSTANT ROW|\w+ VIRTUAL TABLE)/.test(detail));
}

function subsets<T extends object>(whole: T): readonly T[] {
  const entries = Object.entries(whole);
  return Array.from(
    { length: 2 ** entries.length },
    (_, mask) => Object.fromEntries(entries.filter((_entry, bit) => (mask >> bit) & 1)) as T,
  );
}

const VERDICT_FILTER: Required<VerdictFilter> = {
  grade: 'suitable',
  modelVersion: '1',
  mainsVoltage: 230,
  mainsFrequency: 50,
  lampCount: 1,
  createdFrom: 1,
  createdBefore: Number.MAX_SAFE_INTEGER,
  dimmerId: 'd',
  lampId: 'l',
  stale: true,
};
const ENTRY_FILTER = { tag: 't', articleNumber: 'n', ratedPowerFrom: 0, ratedPowerTo: 9 };

/** Calls everything the stores offer but imports, in every combination of filters. */
function useEverything(stores: Stores): void {
  const { verdicts, requirements, verdictSearch, judgedPairs, partnerSearch, entries, entrySearch } = stores;
  putEntry(stores, 'dimmer', 'd');
  putEntry(stores, 'lamp', 'l');
  judgedPair(stores, 1, ['d', 1], ['l', 1]);
  putEntry(stores, 'lamp', 'l', 'second');
  const { row } = verdicts.insertOnce(verdictRow(2));
  verdicts.findById(row.id);
  requirements.insertOnce({ verdict_id: row.id, model_version: '1', created_at: row.created_at, content: '{}' });
  verdicts.count();
  judgedPairs.ofVerdict(1, 10);
  judgedPairs.ofPair('d', 'l', 10);
  judgedPairs.newestOfPair('d', 'l', 1);
  judgedPairs.stampOf('d', 'l');
  for (const filter of subsets<VerdictFilter>(VERDICT_FILTER)) {
    verdictSearch.page(filter, NEWEST, 1);
    if (filter.stale === true) verdictSearch.page({ ...filter, stale: false }, NEWEST, 1);
  }
  for (const words of [[], ['a'], ['a', 'b']]) {
    for (const filter of subsets<Omit<EntryFilter, 'words'>>(ENTRY_FILTER)) entrySearch.page('lamp', { ...filter, words }, '', 1);
  }
  for (const kind of ['dimmer', 'lamp'] as const) {
    for (const filter of subsets({ lampCount: 1, mainsVoltage: 230, mainsFrequency: 50 })) {
      for (const grades of [['suitable'], ['suitable', 'conditional']] as const) {
        partnerSearch.page(kind, kind.charAt(0), { ...filter, grades }, { created_at: 9e15, verdict: 9e15, seq: 9e15 }, 1);
      }
    }
  }
  entries.has('lamp', 'l');
  entries.findRevision('lamp', 'l', 1);
  entries.together(() => entries.delete('lamp', 'l', '2026-03-02T08:00:00.000Z'));
}

describe('the plan of every statement', () => {
  it('reads no table from end to end', () => {
    const record = temporaryRecord();
    const statements = statementsOf(record, (watched) => useEverything(storesOf(watched)));
    expect(statements.length).toBeGreaterThan(300);
    const scanning = statements.flatMap((sql) => {
      const scans = scansIn(planOf(record, sql));
      return scans.length === 0 ? [] : [{ sql, scans }];
    });
    expect(scanning).toEqual([]);
  });

  it('needs no sorting for a page of verdicts: an index has the order', () => {
    const record = temporaryRecord();
    const statements = statementsOf(record, (watched) => useEverything(storesOf(watched))).filter((sql) => sql.includes('AS hit FROM'));
    expect(statements.length).toBeGreaterThan(200);
    expect(statements.filter((sql) => planOf(record, sql).some((step) => step.includes('TEMP B-TREE')))).toEqual([]);
  });

  it('is one that this test could fail by', () => {
    const record = temporaryRecord();
    expect(scansIn(planOf(record, "SELECT id FROM verdicts WHERE summary = 'x'"))).toEqual(['SCAN verdicts']);
    expect(scansIn(planOf(record, 'SELECT count(*) FROM verdicts'))).toHaveLength(1);
  });
});
