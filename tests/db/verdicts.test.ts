import { describe, expect, it } from 'vitest';
import { type VerdictRow, verdictStore } from '../../db/verdicts.ts';
import { temporaryRecord } from '../support/server-temporary-record.ts';

function row(number: number, changes: Partial<VerdictRow> = {}): VerdictRow {
  const fingerprint = number.toString(16).padStart(2, '0').repeat(32);
  return {
    id: fingerprint.slice(0, 26),
    fingerprint,
    model_version: '1',
    created_at: '2026-03-02T08:00:00.000Z',
    grade: 'suitable',
    summary: `Verdict ${number}.`,
    mains_voltage: 230,
    mains_frequency: 50,
    pairing: '{}',
    assumptions: '[]',
    judgement: '{}',
    ...changes,
  };
}

describe('the verdict store', () => {
  it('stores a fingerprint once and gives the first row back the second time', () => {
    const store = verdictStore(temporaryRecord());
    expect(store.insertOnce(row(1))).toEqual({ row: row(1), stored: true });
    expect(store.insertOnce(row(1, { summary: 'Another.' }))).toEqual({ row: row(1), stored: false });
    expect(store.count()).toBe(1);
  });

  it('finds a row by its id and by its fingerprint', () => {
    const store = verdictStore(temporaryRecord());
    store.insertOnce(row(1));
    expect(store.findById(row(1).id)).toEqual(row(1));
    expect(store.findByFingerprint(row(1).fingerprint)).toEqual(row(1));
    expect(store.findById(row(2).id)).toBeUndefined();
  });

  it('pages newest first, each row exactly once', () => {
    const store = verdictStore(temporaryRecord());
    for (let number = 1; number <= 7; number += 1) store.insertOnce(row(number));
    const seen: string[] = [];
    let before = Number.MAX_SAFE_INTEGER;
    for (let page = store.page({}, before, 3); page.length > 0; page = store.page({}, before, 3)) {
      seen.push(...page.map(({ summary }) => summary));
      before = page.at(-1)?.seq ?? 0;
    }
    expect(seen).toEqual([7, 6, 5, 4, 3, 2, 1].map((number) => `Verdict ${number}.`));
  });

  it('filters a page by every column it offers', () => {
    const store = verdictStore(temporaryRecord());
    store.insertOnce(row(1));
    store.insertOnce(row(2, { grade: 'unsuitable' }));
    store.insertOnce(row(3, { model_version: '2' }));
    store.insertOnce(row(4, { mains_voltage: 120, mains_frequency: 60 }));
    const found = (filter: Parameters<typeof store.page>[0]) => store.page(filter, 100, 10).map(({ summary }) => summary);
    expect(found({ grade: 'unsuitable' })).toEqual(['Verdict 2.']);
    expect(found({ modelVersion: '2' })).toEqual(['Verdict 3.']);
    expect(found({ mainsVoltage: 120 })).toEqual(['Verdict 4.']);
    expect(found({ mainsFrequency: 60, grade: 'suitable' })).toEqual(['Verdict 4.']);
    expect(found({ mainsVoltage: 120, grade: 'unsuitable' })).toEqual([]);
  });

  it.each<[string, Partial<VerdictRow>]>([
    ['an unknown grade', { grade: 'fine' as never }],
    ['JSON that does not parse', { judgement: '{' }],
    ['a time that is not ISO 8601', { created_at: 'yesterday' }],
    ['an id of another length', { id: 'short' }],
  ])('refuses %s', (_, changes) => {
    const store = verdictStore(temporaryRecord());
    expect(() => store.insertOnce(row(1, changes))).toThrow(/CHECK constraint failed/);
    expect(store.count()).toBe(0);
  });
});
