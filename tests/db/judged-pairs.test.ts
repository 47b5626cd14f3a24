import { describe, expect, it } from 'vitest';
import { type Stores, storesOf } from '../../db/stores.ts';
import { judgedPair, plainCircuit, putEntry, verdictRow } from '../support/db-rows.ts';
import { temporaryRecord } from '../support/server-temporary-record.ts';

const AT = '2026-03-02T09:00:00.000Z';

function catalogue(): Stores {
  const stores = storesOf(temporaryRecord());
  for (const id of ['d1', 'd2']) putEntry(stores, 'dimmer', id);
  for (const id of ['l1', 'l2']) putEntry(stores, 'lamp', id);
  return stores;
}

const staleOf = ({ judgedPairs }: Stores, verdict: number) => judgedPairs.ofVerdict(verdict, 10).map(({ stale }) => stale);

describe('the tie of a verdict to what it judged', () => {
  it('knows the revisions and the count, and is made once', () => {
    const stores = catalogue();
    judgedPair(stores, 1, ['d1', 1], ['l1', 1], { lamp_count: 3 });
    judgedPair(stores, 1, ['d1', 1], ['l1', 1], { lamp_count: 3 });
    expect(stores.judgedPairs.ofVerdict(1, 10)).toEqual([
      { dimmer_id: 'd1', dimmer_revision: 1, lamp_id: 'l1', lamp_revision: 1, lamp_count: 3, plain: 1, stale: 0 },
    ]);
  });

  it('turns stale with an edit of the dimmer or the lamp, and no other does', () => {
    const stores = catalogue();
    judgedPair(stores, 1, ['d1', 1], ['l1', 1]);
    judgedPair(stores, 2, ['d2', 1], ['l1', 1]);
    judgedPair(stores, 3, ['d2', 1], ['l2', 1]);
    putEntry(stores, 'dimmer', 'd1', 'second');
    expect([staleOf(stores, 1), staleOf(stores, 2), staleOf(stores, 3)]).toEqual([[1], [0], [0]]);
    putEntry(stores, 'lamp', 'l2', 'second');
    expect([staleOf(stores, 1), staleOf(stores, 2), staleOf(stores, 3)]).toEqual([[1], [0], [1]]);
  });

  it('stays fresh where only text was edited, and is fresh again where the circuit is put back', () => {
    const stores = catalogue();
    judgedPair(stores, 1, ['d1', 1], ['l1', 1]);
    putEntry(stores, 'lamp', 'l1', 'first', 'Another note.');
    expect(staleOf(stores, 1)).toEqual([0]);
    putEntry(stores, 'lamp', 'l1', 'second');
    expect(staleOf(stores, 1)).toEqual([1]);
    putEntry(stores, 'lamp', 'l1', 'first');
    expect(staleOf(stores, 1)).toEqual([0]);
  });

  it('turns stale when an entry is deleted, and stays readable; put back as it was, it holds again', () => {
    const stores = catalogue();
    judgedPair(stores, 1, ['d1', 1], ['l1', 1]);
    stores.entries.together(() => stores.entries.delete('lamp', 'l1', AT));
    expect(stores.judgedPairs.ofVerdict(1, 10)).toMatchObject([{ lamp_id: 'l1', lamp_revision: 1, stale: 1 }]);
    putEntry(stores, 'lamp', 'l1');
    expect(staleOf(stores, 1)).toEqual([0]);
  });

  it('is stale from the start where the entry was edited while it was judged', () => {
    const stores = catalogue();
    putEntry(stores, 'dimmer', 'd1', 'second');
    judgedPair(stores, 1, ['d1', 1], ['l1', 1]);
    expect(staleOf(stores, 1)).toEqual([1]);
  });

  it('of a mixed circuit turns stale whole, and is one tie however often it is made', () => {
    const stores = catalogue();
    const { row } = stores.verdicts.insertOnce(verdictRow(1, { lamp_count: 5 }));
    const groups = [
      { lamp: { id: 'l1', revision: 1 }, count: 2 },
      { lamp: undefined, count: 1 },
      { lamp: { id: 'l2', revision: 1 }, count: 2 },
    ];
    for (const dimmer of [{ id: 'd1', revision: 1 }, undefined, { id: 'd1', revision: 1 }]) {
      stores.judgedPairs.tie(row.id, { dimmer, groups, plain: false });
    }
    const ties = () => stores.judgedPairs.ofVerdict(1, 10).map(({ dimmer_id, lamp_id, stale }) => [dimmer_id, lamp_id, stale]);
    expect(ties()).toEqual([
      ['d1', 'l1', 0],
      ['d1', null, 0],
      ['d1', 'l2', 0],
      [null, 'l1', 0],
      [null, 'l2', 0],
    ]);
    putEntry(stores, 'dimmer', 'd1', 'second');
    expect(ties().map(([, , stale]) => stale)).toEqual([1, 1, 1, 0, 0]);
    putEntry(stores, 'lamp', 'l2', 'second');
    expect(ties().map(([, , stale]) => stale)).toEqual([1, 1, 1, 1, 1]);
  });

  it('needs a stored verdict and known entries', () => {
    const stores = catalogue();
    expect(() => stores.judgedPairs.tie('0'.repeat(26), plainCircuit(['d1', 1], ['l1', 1]))).toThrow(/not stored/);
    const { row } = stores.verdicts.insertOnce(verdictRow(1));
    expect(() => stores.judgedPairs.tie(row.id, plainCircuit(['d1', 1], ['nobody', 1]))).toThrow(/not in the catalogue/);
    expect(stores.judgedPairs.ofVerdict(1, 10)).toEqual([]);
  });
});

describe('the partners of an entry', () => {
  const NEWEST = { created_at: 9e15, verdict: 9e15, seq: 9e15 };
  const partners = ({ partnerSearch }: Stores, kind: 'dimmer' | 'lamp', id: string, changes: object = {}) =>
    partnerSearch
      .page(kind, id, { grades: ['suitable', 'conditional'], ...changes }, NEWEST, 10)
      .partners.map(({ partner_id, lamp_count, summary }) => [partner_id, lamp_count, summary]);

  it('are those of the newest verdict that holds, for each count and mains', () => {
    const stores = catalogue();
    judgedPair(stores, 1, ['d1', 1], ['l1', 1]);
    judgedPair(stores, 2, ['d1', 1], ['l1', 1], { model_version: '2' });
    judgedPair(stores, 3, ['d1', 1], ['l1', 1], { lamp_count: 4 });
    judgedPair(stores, 4, ['d2', 1], ['l1', 1]);
    judgedPair(stores, 5, ['d2', 1], ['l1', 1], { grade: 'unsuitable', model_version: '2' });
    judgedPair(stores, 6, ['d1', 1], ['l2', 1], { mains_voltage: 120 });
    expect(partners(stores, 'lamp', 'l1')).toEqual([
      ['d1', 4, 'Verdict 3.'],
      ['d1', 1, 'Verdict 2.'],
    ]);
    expect(partners(stores, 'lamp', 'l1', { lampCount: 4 })).toEqual([['d1', 4, 'Verdict 3.']]);
    expect(partners(stores, 'lamp', 'l1', { grades: ['unsuitable'] })).toEqual([['d2', 1, 'Verdict 5.']]);
    expect(partners(stores, 'dimmer', 'd1', { mainsVoltage: 120 })).toEqual([['l2', 1, 'Verdict 6.']]);
    expect(partners(stores, 'dimmer', 'd1').map(([id]) => id)).toEqual(['l2', 'l1', 'l1']);
  });

  it('are not those of a circuit that is mixed, stale or of a deleted partner', () => {
    const stores = catalogue();
    const { row } = stores.verdicts.insertOnce(verdictRow(1));
    stores.judgedPairs.tie(row.id, { ...plainCircuit(['d1', 1], ['l1', 1]), plain: false });
    judgedPair(stores, 2, ['d2', 1], ['l1', 1]);
    expect(partners(stores, 'lamp', 'l1')).toEqual([['d2', 1, 'Verdict 2.']]);
    stores.entries.together(() => stores.entries.delete('dimmer', 'd2', AT));
    expect(partners(stores, 'lamp', 'l1')).toEqual([]);
  });

  it('are listed once where an edit of text left two ties to one verdict', () => {
    const stores = catalogue();
    judgedPair(stores, 1, ['d1', 1], ['l1', 1]);
    putEntry(stores, 'lamp', 'l1', 'first', 'Another note.');
    judgedPair(stores, 1, ['d1', 1], ['l1', 2]);
    expect(partners(stores, 'lamp', 'l1')).toEqual([['d1', 1, 'Verdict 1.']]);
  });
});
