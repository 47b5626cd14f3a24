import { describe, expect, it } from 'vitest';
import type { RecordDatabase } from '../../db/record.ts';
import { putEntry } from '../../server/catalogue/entries.ts';
import { embeddedQueue } from '../../server/queue/embedded-queue.ts';
import type { AskedScreening } from '../../server/schemas/screening.ts';
import { startSimulationPool } from '../../server/simulation/simulation-pool.ts';
import { cheapScreening, dimmerId, fillCatalogue, lampEntryOf, lampId } from '../support/screening-catalogue.ts';
import { fakeQueue } from '../support/screening-fake-queue.ts';
import { type TestScreenings, testScreenings } from '../support/screening-service.ts';
import { pending } from '../support/server-fake-simulation.ts';
import { FIXED_NOW, temporaryRecord } from '../support/server-temporary-record.ts';

const PATIENCE = { timeout: 30_000 };
const OVERWRITE = { kind: 'whatever' } as const;

async function ask({ screenings }: TestScreenings, asked: AskedScreening = cheapScreening()) {
  const answer = await screenings.ask(asked);
  if (!answer.ok) throw new Error(`It was to be accepted: ${JSON.stringify(answer.issues)}`);
  return answer.screening;
}

const pagesOf = (record: RecordDatabase) => record.pragma('page_count', { simple: true }) as number;

/** How many pages of its file a whole screening fills where nothing is in its way. */
async function pagesTaken(lamps: number, dimmers: number): Promise<number> {
  const record = temporaryRecord();
  fillCatalogue(record, lamps, dimmers);
  const before = pagesOf(record);
  const service = testScreenings(record, fakeQueue());
  await ask(service);
  await service.settled();
  return pagesOf(record) - before;
}

describe('a screening', () => {
  it('judges every lamp with every dimmer at every count, and gives the results in that order', async () => {
    const record = temporaryRecord();
    fillCatalogue(record, 3, 2);
    const service = testScreenings(record, fakeQueue());
    const { id, counts, foundStored } = await ask(service, cheapScreening({ counts: [1, 4] }));
    expect(counts.total).toBe(12);
    expect(foundStored).toEqual({ pairings: 0, basis: 'counted', lookedAt: 12 });
    await service.settled();

    expect(await service.read(id)).toMatchObject({
      state: 'finished',
      counts: { total: 12, stored: 0, done: 12, failed: 0, toGo: 0 },
      estimate: null,
    });
    const rows = await service.results(id);
    expect(rows.map((row) => [row.lampId, row.dimmerId, row.count])).toEqual(
      [0, 1, 2].flatMap((lamp) => [0, 1].flatMap((dimmer) => [1, 4].map((count) => [lampId(lamp), dimmerId(dimmer), count]))),
    );
    expect(rows[0]).toEqual({
      lampId: lampId(0),
      dimmerId: dimmerId(0),
      count: 1,
      outcome: 'judged',
      grade: 'suitable',
      summary: 'Canned for a test.',
      verdictId: expect.stringMatching(/^[0-9a-f]{26}$/),
    });
    expect(new Set(rows.map(({ verdictId }) => verdictId)).size).toBe(12);
  });

  it('is judged by real threads, and asked again finds everything stored', async () => {
    const record = temporaryRecord();
    fillCatalogue(record, 3, 3);
    const pool = startSimulationPool({ threads: 1, queueLimit: 8 });
    const service = testScreenings(record, embeddedQueue(pool, 1));
    const first = await ask(service);
    await service.settled();
    expect((await service.read(first.id)).counts).toEqual({ total: 9, stored: 0, done: 9, failed: 0, toGo: 0 });

    const second = await ask(service);
    expect(second.foundStored).toEqual({ pairings: 9, basis: 'counted', lookedAt: 9 });
    await service.settled();
    expect((await service.read(second.id)).counts).toEqual({ total: 9, stored: 9, done: 0, failed: 0, toGo: 0 });
    const judged = await service.results(first.id);
    expect(await service.results(second.id)).toEqual(judged.map((row) => ({ ...row, outcome: 'stored' })));
    await service.stop();
    await pool.destroy();
  });

  it('asks a question once where lamps under two ids are the same', async () => {
    const record = temporaryRecord();
    const entries = fillCatalogue(record, 70, 1);
    for (const index of [1, 69]) {
      const entry = { ...lampEntryOf(0), name: `The same again, ${index}` };
      putEntry(entries, lampId(index), { kind: 'lamp', entry }, OVERWRITE, FIXED_NOW);
    }
    const queue = fakeQueue();
    const service = testScreenings(record, queue);
    const { id } = await ask(service);
    await service.settled();
    expect((await service.read(id)).counts).toEqual({ total: 70, stored: 2, done: 68, failed: 0, toGo: 0 });
    expect([...queue.asked.values()].every((times) => times === 1)).toBe(true);
    const rows = await service.results(id);
    expect([rows[0], rows[1], rows[69]].map((row) => row?.outcome)).toEqual(['judged', 'stored', 'stored']);
    expect(rows[69]?.verdictId).toBe(rows[0]?.verdictId);
  });

  it('goes on where another process left it, judging nothing twice', async () => {
    const record = temporaryRecord();
    fillCatalogue(record, 20, 10);
    let left = 77;
    const first = fakeQueue({
      answer: () => {
        left -= 1;
        return left >= 0 ? 'judged' : pending<undefined>().promise;
      },
    });
    const before = testScreenings(record, first);
    const { id } = await ask(before);
    await expect.poll(() => first.questions(), PATIENCE).toBeGreaterThanOrEqual(78);
    await before.stop();
    expect(await before.read(id)).toMatchObject({ state: 'running', counts: { total: 200, done: 77, toGo: 123 } });
    expect(await before.results(id)).toHaveLength(77);

    const second = fakeQueue();
    const after = testScreenings(record, second);
    await after.settled();
    expect(await after.read(id)).toMatchObject({ state: 'finished', counts: { total: 200, stored: 0, done: 200, failed: 0, toGo: 0 } });
    expect(second.questions()).toBe(123);
    const rows = await after.results(id);
    expect(new Set(rows.map((row) => `${row.lampId} ${row.dimmerId}`)).size).toBe(200);
  });

  it('gives a pairing up with its inputs, and does the rest', async () => {
    const record = temporaryRecord();
    fillCatalogue(record, 3, 3);
    const failure = { kind: 'thread-lost', detail: 'the thread exited', attempts: 2 } as const;
    const service = testScreenings(record, fakeQueue({ answer: ({ position }) => (position === 4 ? failure : 'judged') }));
    const { id } = await ask(service);
    await service.settled();
    expect(await service.read(id)).toMatchObject({ state: 'finished', counts: { total: 9, stored: 0, done: 8, failed: 1, toGo: 0 } });
    const failed = (await service.results(id)).filter(({ outcome }) => outcome === 'failed');
    expect(failed).toMatchObject([
      { lampId: lampId(1), dimmerId: dimmerId(1), count: 1, grade: null, verdictId: null, summary: 'the thread exited' },
    ]);
    expect(failed[0]?.failure).toMatchObject({
      kind: 'thread-lost',
      attempts: 2,
      pairing: { mains: { voltage_V: 230 }, lamps: [{ count: 1, lamp: { load: { resistance_Ohm: 501 } } }], dimmer: { turnOffTime_us: 1 } },
    });
  });

  it('keeps what is done when it is cancelled, and judges nothing more', async () => {
    const record = temporaryRecord();
    fillCatalogue(record, 10, 10);
    const queue = fakeQueue({ answer: ({ position }) => (position < 30 ? 'judged' : pending<undefined>().promise) });
    const service = testScreenings(record, queue);
    const { id } = await ask(service);
    await expect.poll(() => queue.questions(), PATIENCE).toBeGreaterThan(30);
    const cancelled = await service.screenings.cancel(id);
    expect(cancelled).toMatchObject({ state: 'cancelled', counts: { done: 30, toGo: 70 }, estimate: null });
    const asked = queue.questions();
    expect(await service.results(id)).toHaveLength(30);
    // Cancelled again, it stays what it is.
    expect(await service.screenings.cancel(id)).toMatchObject({ state: 'cancelled', endedAt: cancelled?.endedAt });
    await service.stop();
    expect(queue.questions()).toBe(asked);
    expect((await service.read(id)).counts.done).toBe(30);
  });

  it('pauses while the disk is full, says so, and goes on when there is room', async () => {
    const record = temporaryRecord();
    fillCatalogue(record, 20, 20);
    const service = testScreenings(record, fakeQueue());
    const room = Math.floor((await pagesTaken(20, 20)) / 2);
    expect(room).toBeGreaterThan(2);
    const fullAt = pagesOf(record) + room;
    record.pragma(`max_page_count = ${fullAt}`);
    const { id } = await ask(service);
    await expect.poll(async () => (await service.read(id)).state, PATIENCE).toBe('paused');
    const paused = await service.read(id);
    expect(paused.pause).toEqual({ reason: 'disk-full', detail: 'The disk that holds the record is full.' });
    expect(paused.counts.done).toBeGreaterThan(0);
    expect(paused.counts.toGo).toBeGreaterThan(0);
    expect(pagesOf(record)).toBeLessThanOrEqual(fullAt);

    record.pragma('max_page_count = 1000000');
    await service.settled();
    expect(await service.read(id)).toMatchObject({ state: 'finished', pause: null, counts: { total: 400, done: 400, toGo: 0 } });
    const states = service.stores.screenings.eventsAfter(service.stores.screenings.find(id)?.seq ?? 0, 0).map(({ state }) => state);
    expect(states).toEqual(['queued', 'running', 'paused', 'running', 'finished']);
  });

  it('pauses while the queue cannot be reached, and goes on when it can', async () => {
    const record = temporaryRecord();
    fillCatalogue(record, 4, 4);
    let reachable = false;
    const queue = fakeQueue({
      answer: () => (reachable ? 'judged' : undefined),
      end: () => (reachable ? { kind: 'done' } : { kind: 'unreachable', detail: 'No queue, for a test.' }),
    });
    const service = testScreenings(record, queue);
    const { id } = await ask(service);
    await expect
      .poll(async () => (await service.read(id)).pause, PATIENCE)
      .toEqual({ reason: 'queue-unreachable', detail: 'No queue, for a test.' });
    reachable = true;
    await service.settled();
    expect(await service.read(id)).toMatchObject({ state: 'finished', counts: { total: 16, done: 16 } });
  });

  it('begins at once with ten million pairings', async () => {
    const record = temporaryRecord();
    fillCatalogue(record, 1000, 500);
    const queue = fakeQueue({ answer: ({ position }) => (position < 10 ? 'judged' : pending<undefined>().promise) });
    const service = testScreenings(record, queue);
    const counts = Array.from({ length: 20 }, (_, index) => index + 1);
    const accepted = await ask(service, cheapScreening({ counts }));
    expect(accepted.counts.total).toBe(10_000_000);
    expect(accepted.foundStored).toMatchObject({ pairings: 0, basis: 'sampled' });
    await expect.poll(async () => (await service.read(accepted.id)).counts.done, PATIENCE).toBe(10);
    // Two chunks are under way, whatever the length of the list.
    expect(queue.questions()).toBeLessThan(200);
  });
});
