import { describe, expect, it } from 'vitest';
import { type Stores, storesOf } from '../../db/stores.ts';
import { NEWEST, type VerdictFilter, type VerdictPlace } from '../../db/verdict-search.ts';
import type { VerdictRow } from '../../db/verdicts.ts';
import { judgedPair, putEntry, verdictRow } from '../support/db-rows.ts';
import { temporaryRecord } from '../support/server-temporary-record.ts';

/** The numbers of the verdicts found, over all pages of `limit`. */
function found({ verdictSearch }: Stores, filter: VerdictFilter, limit = 10): number[] {
  const numbers: number[] = [];
  let place: VerdictPlace | undefined = NEWEST;
  while (place !== undefined) {
    const page = verdictSearch.page(filter, place, limit);
    numbers.push(...page.headings.map(({ summary }) => Number(/\d+/.exec(summary)?.[0])));
    place = page.next;
  }
  return numbers;
}

function stored(rows: { readonly [number: number]: Partial<VerdictRow> }): Stores {
  const stores = storesOf(temporaryRecord());
  for (const [number, changes] of Object.entries(rows)) stores.verdicts.insertOnce(verdictRow(Number(number), changes));
  return stores;
}

describe('a list of verdicts', () => {
  it('is newest first, each exactly once, whatever the length of a page', () => {
    const stores = stored({ 1: {}, 2: {}, 3: {}, 4: {}, 5: {}, 6: {}, 7: {} });
    for (const limit of [1, 2, 3, 7, 8]) expect(found(stores, {}, limit)).toEqual([7, 6, 5, 4, 3, 2, 1]);
  });

  it('has an order of its own where many were computed in the same millisecond', () => {
    const created_at = '2026-03-02T08:00:00.000Z';
    const stores = stored({ 1: { created_at }, 2: { created_at }, 3: { created_at }, 4: { created_at } });
    for (const limit of [1, 3]) expect(found(stores, {}, limit)).toEqual([4, 3, 2, 1]);
  });

  it('does not shift when verdicts arrive between two pages', () => {
    const stores = stored({ 1: {}, 2: {}, 3: {} });
    const first = stores.verdictSearch.page({}, NEWEST, 2);
    stores.verdicts.insertOnce(verdictRow(4));
    const second = stores.verdictSearch.page({}, first.next ?? NEWEST, 2);
    expect([...first.headings, ...second.headings].map(({ summary }) => summary)).toEqual(['Verdict 3.', 'Verdict 2.', 'Verdict 1.']);
  });

  it.each<[VerdictFilter, number[]]>([
    [{ grade: 'unsuitable' }, [5, 2]],
    [{ modelVersion: '2' }, [3]],
    [{ mainsVoltage: 120 }, [5, 4]],
    [{ mainsFrequency: 60 }, [4]],
    [{ mainsVoltage: 120, mainsFrequency: 60 }, [4]],
    [{ lampCount: 4 }, [5, 1]],
    [{ createdFrom: Date.parse('2026-03-02T08:00:03.000Z') }, [5, 4, 3]],
    [{ createdBefore: Date.parse('2026-03-02T08:00:03.000Z') }, [2, 1]],
    [{ createdFrom: Date.parse('2026-03-02T08:00:02.000Z'), createdBefore: Date.parse('2026-03-02T08:00:04.000Z') }, [3, 2]],
    [{ grade: 'unsuitable', mainsVoltage: 120, lampCount: 4, modelVersion: '1' }, [5]],
    [{ grade: 'suitable', lampCount: 4, createdBefore: Date.parse('2026-03-03') }, [1]],
    [{ grade: 'conditional' }, []],
    [{ grade: 'suitable', modelVersion: 'none' }, []],
    [{ stale: false }, []],
  ])('filtered by %o gives %o', (filter, numbers) => {
    const stores = stored({
      1: { lamp_count: 4 },
      2: { grade: 'unsuitable' },
      3: { model_version: '2' },
      4: { mains_voltage: 120, mains_frequency: 60 },
      5: { mains_voltage: 120, grade: 'unsuitable', lamp_count: 4 },
    });
    for (const limit of [1, 10]) expect(found(stores, filter, limit)).toEqual(numbers);
  });

  it.each<[VerdictFilter, number[]]>([
    [{ lampId: 'l1' }, [4, 2, 1]],
    [{ dimmerId: 'd1' }, [4, 3, 1]],
    [{ dimmerId: 'd1', lampId: 'l1' }, [4, 1]],
    [{ dimmerId: 'd2', lampId: 'l2' }, []],
    [{ lampId: 'nobody' }, []],
    [{ lampId: 'l1', stale: true }, [1]],
    [{ lampId: 'l1', stale: false }, [4, 2]],
    [{ stale: true }, [3, 1]],
    [{ stale: false }, [4, 2]],
    [{ stale: true, lampCount: 2 }, [3]],
    [{ dimmerId: 'd1', stale: false, grade: 'unsuitable' }, [4]],
  ])('of the catalogue, filtered by %o, gives %o', (filter, numbers) => {
    const stores = storesOf(temporaryRecord());
    for (const id of ['d1', 'd2']) putEntry(stores, 'dimmer', id);
    for (const id of ['l1', 'l2']) putEntry(stores, 'lamp', id);
    judgedPair(stores, 1, ['d1', 1], ['l1', 1]);
    judgedPair(stores, 2, ['d2', 1], ['l1', 1]);
    judgedPair(stores, 3, ['d1', 1], ['l2', 1], { lamp_count: 2 });
    putEntry(stores, 'dimmer', 'd1', 'second');
    judgedPair(stores, 4, ['d1', 2], ['l1', 1], { grade: 'unsuitable' });
    stores.verdicts.insertOnce(verdictRow(5));
    for (const limit of [1, 10]) expect(found(stores, filter, limit)).toEqual(numbers);
  });

  it('walks the filter that tells most, and finds what any other walk would', () => {
    const stores = storesOf(temporaryRecord());
    stores.entries.together(() => {
      for (let number = 1; number <= 1_500; number += 1) {
        const changes = { grade: number % 500 === 0 ? ('conditional' as const) : ('suitable' as const), lamp_count: (number % 2) + 1 };
        stores.verdicts.insertOnce(verdictRow(number, changes));
      }
    });
    expect(found(stores, { grade: 'conditional', lampCount: 1 })).toEqual([1500, 1000, 500]);
    expect(found(stores, { grade: 'conditional', lampCount: 2 })).toEqual([]);
    expect(found(stores, { grade: 'suitable', lampCount: 1, modelVersion: '1' }, 100)).toHaveLength(747);
    expect(found(stores, { grade: 'suitable', mainsVoltage: 120 })).toEqual([]);
  });

  it('lists a verdict once although several of the entries asked for share it', () => {
    const stores = storesOf(temporaryRecord());
    putEntry(stores, 'dimmer', 'd');
    for (const id of ['l1', 'l2', 'l3']) putEntry(stores, 'lamp', id);
    for (const id of ['l1', 'l2', 'l3']) judgedPair(stores, 1, ['d', 1], [id, 1]);
    judgedPair(stores, 2, ['d', 1], ['l1', 1]);
    for (const limit of [1, 2, 10]) expect(found(stores, { dimmerId: 'd' }, limit)).toEqual([2, 1]);
  });

  it('ends a page early where many rows were looked at in vain, and finds the rare one on the next', () => {
    const stores = storesOf(temporaryRecord());
    putEntry(stores, 'dimmer', 'd');
    putEntry(stores, 'lamp', 'l');
    stores.entries.together(() => {
      for (let number = 1; number <= 2_500; number += 1) stores.verdicts.insertOnce(verdictRow(number));
    });
    judgedPair(stores, 7, ['d', 1], ['l', 1]);
    const first = stores.verdictSearch.page({ stale: false }, NEWEST, 10);
    expect([first.headings, first.next?.seq]).toEqual([[], 1501]);
    expect(found(stores, { stale: false })).toEqual([7]);
    expect(found(stores, { stale: false, grade: 'suitable', lampCount: 1 })).toEqual([7]);
  });
});
