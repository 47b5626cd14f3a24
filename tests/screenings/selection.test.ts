import { describe, expect, it } from 'vitest';
import { deleteEntry, putEntry } from '../../server/catalogue/entries.ts';
import type { AskedScreening } from '../../server/schemas/screening.ts';
import { cheapScreening, dimmerEntryOf, dimmerId, fillCatalogue, lampEntryOf, lampId } from '../support/screening-catalogue.ts';
import { fakeQueue } from '../support/screening-fake-queue.ts';
import { testScreenings } from '../support/screening-service.ts';
import { FIXED_NOW, temporaryRecord } from '../support/server-temporary-record.ts';

const OVERWRITE = { kind: 'whatever' } as const;

async function lampsChosen(lamps: AskedScreening['lamps']) {
  const record = temporaryRecord();
  fillCatalogue(record, 5, 1);
  const service = testScreenings(record, fakeQueue());
  const answer = await service.screenings.ask(cheapScreening({ lamps }));
  if (!answer.ok) return answer.issues;
  await service.settled();
  return (await service.results(answer.screening.id)).map((row) => row.lampId);
}

describe('what a screening selects', () => {
  it('is all, a tag, the words of a name, or ids in their order', async () => {
    expect(await lampsChosen({ all: true })).toEqual([0, 1, 2, 3, 4].map(lampId));
    expect(await lampsChosen({ tag: 'odd' })).toEqual([1, 3].map(lampId));
    expect(await lampsChosen({ search: 'READ lamp 3' })).toEqual([lampId(3)]);
    expect(await lampsChosen({ ids: [lampId(4), lampId(0)] })).toEqual([4, 0].map(lampId));
  });

  it('is refused where it is nothing, naming each id that is not there', async () => {
    expect(await lampsChosen({ tag: 'no such tag' })).toEqual([{ path: 'lamps', message: 'selects no lamp of the catalogue' }]);
    expect(await lampsChosen({ ids: ['a', lampId(1), 'b'] })).toEqual([
      { path: 'lamps.ids[0]', message: 'is no lamp of the catalogue' },
      { path: 'lamps.ids[2]', message: 'is no lamp of the catalogue' },
    ]);
  });

  it('leaves nothing behind where it is refused', async () => {
    const record = temporaryRecord();
    const service = testScreenings(record, fakeQueue());
    expect(await service.screenings.ask(cheapScreening())).toMatchObject({ ok: false });
    expect(await service.screenings.page(Number.MAX_SAFE_INTEGER, 10)).toEqual([]);
  });

  it('is refused above a hundred million pairings, with the reckoning', async () => {
    const record = temporaryRecord();
    fillCatalogue(record, 3000, 2000);
    const service = testScreenings(record, fakeQueue());
    const counts = Array.from({ length: 20 }, (_, index) => index + 1);
    expect(await service.screenings.ask(cheapScreening({ counts }))).toEqual({
      ok: false,
      issues: [{ path: 'lamps', message: expect.stringMatching(/3000 lamps x 2000 dimmers x 20 counts are 120000000 pairings/) }],
    });
  });

  it('is frozen: edits and deletions after it began change nothing', async () => {
    const record = temporaryRecord();
    const entries = fillCatalogue(record, 2, 1);
    let release: (value: 'judged') => void = () => undefined;
    const held = new Promise<'judged'>((resolve) => {
      release = resolve;
    });
    const queue = fakeQueue({ answer: () => held });
    const service = testScreenings(record, queue);
    const answer = await service.screenings.ask(cheapScreening());
    await expect.poll(() => queue.questions()).toBe(1);
    putEntry(entries, lampId(1), { kind: 'lamp', entry: lampEntryOf(900) }, OVERWRITE, FIXED_NOW);
    putEntry(entries, lampId(7), { kind: 'lamp', entry: lampEntryOf(7) }, OVERWRITE, FIXED_NOW);
    deleteEntry(entries, 'dimmer', dimmerId(0), { kind: 'unstated' }, FIXED_NOW);
    release('judged');
    await service.settled();
    if (!answer.ok) throw new Error('It was to be accepted.');
    const rows = await service.results(answer.screening.id);
    expect(rows.map((row) => row.lampId)).toEqual([lampId(0), lampId(1)]);
    const second = service.stores.verdicts.findById(rows[1]?.verdictId ?? '');
    expect(JSON.parse(second?.pairing ?? '{}').lamps[0].lamp.load.resistance_Ohm).toBe(501);
  });
});

describe('a screening for later', () => {
  it('waits for its time, lets others go first, and then takes the catalogue as it is', async () => {
    const record = temporaryRecord();
    const entries = fillCatalogue(record, 1, 1);
    let time = FIXED_NOW.getTime();
    const service = testScreenings(record, fakeQueue(), () => new Date(time));
    const startAt = new Date(time + 3_600_000).toISOString();
    const later = await service.screenings.ask(cheapScreening({ startAt }));
    const now = await service.screenings.ask(cheapScreening());
    await service.settled();
    if (!later.ok || !now.ok) throw new Error('Both were to be accepted.');
    expect((await service.read(now.screening.id)).state).toBe('finished');
    expect(await service.read(later.screening.id)).toMatchObject({ state: 'queued', startAt, startedAt: null, counts: { total: 1 } });

    putEntry(entries, dimmerId(1), { kind: 'dimmer', entry: dimmerEntryOf(1) }, OVERWRITE, FIXED_NOW);
    time += 3_600_000;
    await service.settled();
    expect(await service.read(later.screening.id)).toMatchObject({
      state: 'finished',
      startedAt: startAt,
      counts: { total: 2, stored: 1, done: 1 },
    });
  });

  it('can be cancelled before it begins', async () => {
    const record = temporaryRecord();
    fillCatalogue(record, 1, 1);
    const queue = fakeQueue();
    const service = testScreenings(record, queue);
    const later = await service.screenings.ask(cheapScreening({ startAt: '2999-01-01T00:00:00+01:00' }));
    if (!later.ok) throw new Error('It was to be accepted.');
    expect(later.screening.startAt).toBe('2998-12-31T23:00:00.000Z');
    expect(await service.screenings.cancel(later.screening.id)).toMatchObject({ state: 'cancelled', counts: { toGo: 1 } });
    await service.settled();
    expect(queue.questions()).toBe(0);
  });
});

describe('a screening that goes on under another model version', () => {
  it('begins anew, so that its verdicts can be compared', async () => {
    const record = temporaryRecord();
    fillCatalogue(record, 2, 2);
    const first = testScreenings(record, fakeQueue({ answer: ({ position }) => (position < 3 ? 'judged' : new Promise(() => undefined)) }));
    const answer = await first.screenings.ask(cheapScreening());
    if (!answer.ok) throw new Error('It was to be accepted.');
    const { id } = answer.screening;
    await expect.poll(async () => (await first.read(id)).counts.done, { timeout: 20_000 }).toBe(3);
    await first.stop();
    record.prepare("UPDATE screenings SET model_version = 'older'").run();
    const second = testScreenings(record, fakeQueue());
    await second.settled();
    // The three of before are stored under the version that the code still has.
    expect(await second.read(id)).toMatchObject({ state: 'finished', counts: { total: 4, stored: 3, done: 1, failed: 0 } });
  });
});
