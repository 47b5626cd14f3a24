import { describe, expect, it } from 'vitest';
import { deleteEntry, putEntry } from '../../server/catalogue/entries.ts';
import { askedScreening } from '../../server/schemas/screening.ts';
import { msUntil } from '../../server/screenings/daily-rescreening.ts';
import { dimmerId, fillCatalogue, lampEntryOf, lampId } from '../support/screening-catalogue.ts';
import { fakeQueue } from '../support/screening-fake-queue.ts';
import { testScreenings } from '../support/screening-service.ts';
import { FIXED_NOW, temporaryRecord } from '../support/server-temporary-record.ts';

const OVERWRITE = { kind: 'whatever' } as const;

/** With the default options: only such verdicts speak for their pair. */
const whole = (voltage_V: number, changes: object = {}) =>
  askedScreening.parse({ lamps: { all: true }, dimmers: { all: true }, mains: { voltage_V, frequency_Hz: 50 }, ...changes });

describe('screening again what is stale', () => {
  it('takes the pairs whose entries were edited, at the mains and count they were judged at, and nothing else', async () => {
    const record = temporaryRecord();
    const entries = fillCatalogue(record, 3, 2);
    const service = testScreenings(record, fakeQueue());
    for (const asked of [whole(230, { counts: [1, 2] }), whole(240)])
      expect(await service.screenings.ask(asked)).toMatchObject({ ok: true });
    await service.settled();
    expect(service.screenings.askStale()).toEqual([]);

    putEntry(entries, lampId(1), { kind: 'lamp', entry: lampEntryOf(700) }, OVERWRITE, FIXED_NOW);
    // Only its name: the verdicts still hold.
    putEntry(entries, lampId(2), { kind: 'lamp', entry: { ...lampEntryOf(2), name: 'Renamed' } }, OVERWRITE, FIXED_NOW);
    const ids = service.screenings.askStale();
    // Asked again before they are done, they are not doubled.
    expect(ids).toHaveLength(2);
    await service.settled();
    const rows = await Promise.all(ids.map(async (id) => (await service.results(id)).map((row) => [row.lampId, row.dimmerId, row.count])));
    const [at230, at240] = rows;
    expect(at230).toEqual([
      [lampId(1), dimmerId(0), 1],
      [lampId(1), dimmerId(0), 2],
      [lampId(1), dimmerId(1), 1],
      [lampId(1), dimmerId(1), 2],
    ]);
    expect(at240).toEqual([
      [lampId(1), dimmerId(0), 1],
      [lampId(1), dimmerId(1), 1],
    ]);
    expect(await service.read(ids[0] ?? '')).toMatchObject({
      request: { stale: true, mains: { voltage_V: 230, frequency_Hz: 50 } },
      counts: { total: 4, done: 4 },
      selected: { lamps: 1, dimmers: 2 },
    });
    // Now there are fresh ones.
    expect(service.screenings.askStale()).toEqual([]);
  });

  it('leaves out what is no longer in the catalogue', async () => {
    const record = temporaryRecord();
    const entries = fillCatalogue(record, 2, 1);
    const service = testScreenings(record, fakeQueue());
    await service.screenings.ask(whole(230));
    await service.settled();
    deleteEntry(entries, 'lamp', lampId(0), { kind: 'unstated' }, FIXED_NOW);
    expect(service.screenings.askStale()).toEqual([]);
  });

  it('is not asked for twice while it runs', async () => {
    const record = temporaryRecord();
    const entries = fillCatalogue(record, 1, 1);
    let held = false;
    const service = testScreenings(record, fakeQueue({ answer: () => (held ? new Promise(() => undefined) : 'judged') }));
    await service.screenings.ask(whole(230));
    await service.settled();
    putEntry(entries, lampId(0), { kind: 'lamp', entry: lampEntryOf(700) }, OVERWRITE, FIXED_NOW);
    held = true;
    expect(service.screenings.askStale()).toHaveLength(1);
    expect(service.screenings.askStale()).toEqual([]);
  });
});

describe('the time until a time of the day', () => {
  it.each([
    ['02:30', '2026-03-02T01:00:00.000Z', 90 * 60_000],
    ['02:30', '2026-03-02T02:30:00.000Z', 24 * 3_600_000],
    ['02:30', '2026-03-02T02:29:59.600Z', 24 * 3_600_000 + 400],
    ['00:00', '2026-12-31T23:00:00.000Z', 3_600_000],
  ])('to %s at %s is that of today or tomorrow, never nothing', (at, now, expected) => {
    expect(msUntil(at, new Date(now))).toBe(expected);
  });
});
