import { describe, expect, it } from 'vitest';
import { storesOf } from '../../db/stores.ts';
import { verdictRow } from '../support/db-rows.ts';
import { temporaryRecord } from '../support/server-temporary-record.ts';

const requirementRow = (changes: object = {}) => ({
  verdict_id: verdictRow(1).id,
  model_version: '1',
  created_at: '2026-03-02T09:00:00.000Z',
  content: '{"points":[]}',
  ...changes,
});

function stores() {
  const all = storesOf(temporaryRecord());
  all.verdicts.insertOnce(verdictRow(1));
  return all.requirements;
}

describe('the requirement store', () => {
  it('keeps one requirement a verdict and model version, and gives the first one back the second time', () => {
    const requirements = stores();
    expect(requirements.find(verdictRow(1).id, '1')).toBeUndefined();
    expect(requirements.insertOnce(requirementRow())).toEqual(requirementRow());
    expect(requirements.insertOnce(requirementRow({ content: '{"points":[1]}' }))).toEqual(requirementRow());
    expect(requirements.insertOnce(requirementRow({ model_version: '2', content: '{}' })).content).toBe('{}');
    expect(requirements.find(verdictRow(1).id, '1')).toEqual(requirementRow());
  });

  it('refuses a requirement of a verdict that is not stored, and JSON that does not parse', () => {
    const requirements = stores();
    expect(() => requirements.insertOnce(requirementRow({ verdict_id: verdictRow(2).id }))).toThrow(/neither stored nor found/);
    expect(() => requirements.insertOnce(requirementRow({ content: '{' }))).toThrow();
  });
});
