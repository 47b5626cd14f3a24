import { describe, expect, it } from 'vitest';
import { type VerdictRow, verdictStore } from '../../db/verdicts.ts';
import { verdictRow } from '../support/db-rows.ts';
import { temporaryRecord } from '../support/server-temporary-record.ts';

describe('the verdict store', () => {
  it('stores a fingerprint once and gives the first row back the second time', () => {
    const store = verdictStore(temporaryRecord());
    expect(store.insertOnce(verdictRow(1))).toEqual({ row: verdictRow(1), stored: true });
    expect(store.insertOnce(verdictRow(1, { summary: 'Another.' }))).toEqual({ row: verdictRow(1), stored: false });
    expect(store.count()).toBe(1);
  });

  it('finds a row by its id and by its fingerprint', () => {
    const store = verdictStore(temporaryRecord());
    store.insertOnce(verdictRow(1));
    expect(store.findById(verdictRow(1).id)).toEqual(verdictRow(1));
    expect(store.findByFingerprint(verdictRow(1).fingerprint)).toEqual(verdictRow(1));
    expect(store.findById(verdictRow(2).id)).toBeUndefined();
  });

  it('counts what is stored, also after a row was refused', () => {
    const store = verdictStore(temporaryRecord());
    expect(store.count()).toBe(0);
    store.insertOnce(verdictRow(1));
    expect(() => store.insertOnce(verdictRow(2, { grade: 'fine' as never }))).toThrow();
    store.insertOnce(verdictRow(1));
    store.insertOnce(verdictRow(3));
    expect(store.count()).toBe(2);
  });

  it.each<[string, Partial<VerdictRow>]>([
    ['an unknown grade', { grade: 'fine' as never }],
    ['JSON that does not parse', { judgement: '{' }],
    ['a time that is none', { created_at: 'yesterday' }],
    ['an id of another length', { id: 'short' }],
    ['a fingerprint of another length', { fingerprint: 'abcd' }],
  ])('refuses %s, and stores nothing of it', (_, changes) => {
    const record = temporaryRecord();
    const store = verdictStore(record);
    expect(() => store.insertOnce(verdictRow(1, changes))).toThrow();
    expect(store.count()).toBe(0);
    expect(record.prepare('SELECT count(*) FROM evidence').pluck().get()).toBe(0);
  });
});
