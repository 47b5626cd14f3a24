import { describe, expect, it } from 'vitest';
import type { JudgingQueue } from '../../server/queue/judging-queue.ts';
import { dimmerId, fillCatalogue, lampId } from '../support/screening-catalogue.ts';
import { fakeQueue } from '../support/screening-fake-queue.ts';
import { listenOnAnyPort, type TestApp, testApp } from '../support/server-app.ts';
import { pending } from '../support/server-fake-simulation.ts';
import type { Loose } from '../support/server-pairings.ts';

const PATIENCE = { timeout: 30_000 };
const ALL = { lamps: { all: true }, dimmers: { all: true }, mains: { voltage_V: 230, frequency_Hz: 50 } };
const NOBODY = '0'.repeat(26);

async function serviceWith(lamps: number, dimmers: number, queue?: JudgingQueue): Promise<TestApp> {
  const service = await testApp({}, queue);
  fillCatalogue(service.record, lamps, dimmers);
  return service;
}

function ask({ app }: TestApp, body: unknown) {
  return app.inject({
    method: 'POST',
    url: '/v1/screenings',
    headers: { 'content-type': 'application/json' },
    payload: JSON.stringify(body),
  });
}

async function finished(service: TestApp, id: string): Promise<Loose> {
  await expect.poll(async () => (await service.get(`/v1/screenings/${id}`)).json().state, PATIENCE).toBe('finished');
  return (await service.get(`/v1/screenings/${id}`)).json();
}

interface SentEvent {
  readonly id: string | undefined;
  readonly event: string | undefined;
  readonly data: Loose;
}

function eventsIn(text: string): readonly SentEvent[] {
  return text
    .split('\n\n')
    .filter((block) => block !== '' && !block.startsWith(':'))
    .map((block) => {
      const field = (name: string) =>
        block
          .split('\n')
          .find((line) => line.startsWith(`${name}: `))
          ?.slice(name.length + 2);
      return { id: field('id'), event: field('event'), data: JSON.parse(field('data') ?? 'null') };
    });
}

describe('POST /v1/screenings', () => {
  it('is answered with 202, where it is, and how much it is', async () => {
    const service = await serviceWith(3, 2);
    const answer = await ask(service, { ...ALL, counts: [1, 4] });
    expect(answer.statusCode).toBe(202);
    const screening = answer.json();
    expect(answer.headers.location).toBe(`/v1/screenings/${screening.id}`);
    expect(screening).toMatchObject({
      state: 'queued',
      selected: { lamps: 3, dimmers: 2 },
      counts: { total: 12, stored: 0, done: 0, failed: 0, toGo: 12 },
      foundStored: { pairings: 0, basis: 'counted' },
      estimate: null,
    });
    const { foundStored: _, ...shown } = screening;
    expect((await service.get(`/v1/screenings/${screening.id}`)).json()).toEqual(shown);
  });

  it('estimates its time from what earlier screenings took', async () => {
    const service = await serviceWith(3, 2, fakeQueue());
    const first = (await ask(service, ALL)).json();
    await finished(service, first.id);
    // The fake queue says that each of six took 1 ms of one thread; the same six are stored, and 5994 more are not.
    const counts = Array.from({ length: 20 }, (_, index) => index + 1);
    fillCatalogue(service.record, 50, 6);
    const second = (await ask(service, { ...ALL, counts, startAt: '2999-01-01T00:00:00Z' })).json();
    expect(second.foundStored).toMatchObject({ basis: 'sampled', lookedAt: 1000 });
    const toJudge = 6000 - second.foundStored.pairings;
    expect(second.estimate).toMatchObject({
      remaining_s: Math.ceil(toJudge / 1000),
      basis: '6 pairings judged before, 1 judged at a time',
    });
  });

  it.each<[string, Loose, string, RegExp]>([
    ['a misspelt field', { ...ALL, lamp: { all: true } }, 'lamp', /is not a field here/],
    ['two ways of selecting at once', { ...ALL, lamps: { all: true, tag: 'x' } }, 'lamps.all', /is not a field here; the fields are tag/],
    ['all: false', { ...ALL, dimmers: { all: false } }, 'dimmers.all', /must be true/],
    ['an id twice', { ...ALL, lamps: { ids: ['a', 'b', 'a'] } }, 'lamps.ids[2]', /must not be there twice/],
    ['no ids', { ...ALL, lamps: { ids: [] } }, 'lamps.ids', /1 to 10000 ids/],
    ['counts out of order', { ...ALL, counts: [4, 1] }, 'counts[1]', /must be above/],
    ['a count of nothing', { ...ALL, counts: [0] }, 'counts[0]', /whole number from 1 to 500/],
    ['no mains', { ...ALL, mains: undefined }, 'mains', /is missing/],
    ['a time without its offset', { ...ALL, startAt: '2026-03-02T22:00:00' }, 'startAt', /with its offset/],
    ['an id that is not there', { ...ALL, dimmers: { ids: ['nowhere'] } }, 'dimmers.ids[0]', /is no dimmer of the catalogue/],
    ['a tag that nothing has', { ...ALL, lamps: { tag: 'nowhere' } }, 'lamps', /selects no lamp/],
  ])('refuses %s, and says where', async (_, body, path, message) => {
    const service = await serviceWith(1, 1);
    const answer = await ask(service, body);
    expect(answer.statusCode).toBe(400);
    expect(answer.json().issues).toContainEqual({ path, message: expect.stringMatching(message) });
    expect((await service.get('/v1/screenings')).json()).toEqual({ items: [], nextCursor: null });
  });
});

describe('the results of a screening', () => {
  it('come as NDJSON or CSV, in the order of the selection', async () => {
    const failure = { kind: 'thread-lost', detail: '=1+1', attempts: 2 } as const;
    const service = await serviceWith(2, 1, fakeQueue({ answer: ({ position }) => (position === 1 ? failure : 'judged') }));
    const { id } = (await ask(service, ALL)).json();
    await finished(service, id);

    const ndjson = await service.get(`/v1/screenings/${id}/results`);
    expect(ndjson.headers['content-type']).toBe('application/x-ndjson; charset=utf-8');
    const rows = ndjson.body
      .trimEnd()
      .split('\n')
      .map((line) => JSON.parse(line));
    expect(rows).toMatchObject([
      { lampId: lampId(0), dimmerId: dimmerId(0), count: 1, outcome: 'judged', grade: 'suitable' },
      {
        lampId: lampId(1),
        outcome: 'failed',
        grade: null,
        summary: '=1+1',
        verdictId: null,
        failure: { kind: 'thread-lost', attempts: 2 },
      },
    ]);
    expect(rows[1].failure.pairing).toMatchObject({ mains: ALL.mains, dimmer: { latchingCurrent_mA: 50 } });

    const csv = await service.get(`/v1/screenings/${id}/results`, { accept: 'text/csv' });
    expect(csv.headers['content-type']).toBe('text/csv; charset=utf-8; header=present');
    expect(csv.body.split('\r\n')).toEqual([
      'lampId,dimmerId,count,outcome,grade,summary,verdictId',
      `${lampId(0)},${dimmerId(0)},1,judged,suitable,Canned for a test.,${rows[0].verdictId}`,
      // a spreadsheet must not run it
      `${lampId(1)},${dimmerId(0)},1,failed,,'=1+1,`,
      '',
    ]);
    expect((await service.get(`/v1/screenings/${id}/results`, { accept: 'image/png' })).statusCode).toBe(406);
  });

  it('are there while it runs, as far as they are known', async () => {
    const service = await serviceWith(
      5,
      1,
      fakeQueue({ answer: ({ position }) => (position < 2 ? 'judged' : pending<undefined>().promise) }),
    );
    const { id } = (await ask(service, ALL)).json();
    await expect.poll(async () => (await service.get(`/v1/screenings/${id}`)).json().counts.done, PATIENCE).toBe(2);
    const { body } = await service.get(`/v1/screenings/${id}/results`);
    expect(body.trimEnd().split('\n')).toHaveLength(2);
  });
});

describe('the events of a screening', () => {
  it('tell every change of state and the progress, and end with it', async () => {
    const service = await serviceWith(3, 3, fakeQueue());
    const { id } = (await ask(service, ALL)).json();
    const answer = await service.get(`/v1/screenings/${id}/events`);
    expect(answer.headers['content-type']).toBe('text/event-stream; charset=utf-8');
    const events = eventsIn(answer.body);
    expect(events.filter(({ event }) => event === 'state').map(({ data }) => data.state)).toEqual(['queued', 'running', 'finished']);
    const progress = events.filter(({ event }) => event === 'progress');
    expect(progress.at(-1)?.data).toMatchObject({ state: 'finished', counts: { total: 9, done: 9, toGo: 0 } });
    const ids = events.map((event) => Number(event.id));
    expect(ids).toEqual([...ids].sort((a, b) => a - b));
  });

  it('go on after the last one that was seen, and are no more when all were', async () => {
    const service = await serviceWith(3, 3, fakeQueue());
    const { id } = (await ask(service, ALL)).json();
    await finished(service, id);
    const all = eventsIn((await service.get(`/v1/screenings/${id}/events`)).body);
    const running = all.find(({ data }) => data.state === 'running');
    const rest = eventsIn((await service.get(`/v1/screenings/${id}/events`, { 'last-event-id': running?.id ?? '' })).body);
    expect(rest).toEqual(all.filter((event) => Number(event.id) > Number(running?.id)));
    expect(rest.length).toBeGreaterThan(0);
    const none = await service.get(`/v1/screenings/${id}/events`, { 'last-event-id': all.at(-1)?.id ?? '' });
    expect([none.statusCode, none.body]).toEqual([204, '']);
    expect((await service.get(`/v1/screenings/${id}/events`, { 'last-event-id': 'x' })).statusCode).toBe(400);
  });

  it('end when the service stops, so that a listener does not hold it back', async () => {
    const service = await serviceWith(1, 1, fakeQueue({ answer: () => pending<undefined>().promise }));
    const { id } = (await ask(service, ALL)).json();
    const port = await listenOnAnyPort(service.app);
    const answer = await fetch(`http://127.0.0.1:${port}/v1/screenings/${id}/events`);
    const text = answer.text();
    await service.app.close();
    expect(eventsIn(await text).map(({ data }) => data.state)).toContain('running');
  });
});

describe('DELETE /v1/screenings/{id}', () => {
  it('cancels and keeps what is done', async () => {
    const service = await serviceWith(
      5,
      1,
      fakeQueue({ answer: ({ position }) => (position < 2 ? 'judged' : pending<undefined>().promise) }),
    );
    const { id } = (await ask(service, ALL)).json();
    await expect.poll(async () => (await service.get(`/v1/screenings/${id}`)).json().counts.done, PATIENCE).toBe(2);
    const answer = await service.app.inject({ method: 'DELETE', url: `/v1/screenings/${id}` });
    expect(answer.statusCode).toBe(200);
    expect(answer.json()).toMatchObject({ state: 'cancelled', counts: { total: 5, done: 2, toGo: 3 }, estimate: null });
  });
});

describe('screenings that are not there', () => {
  it.each([
    ['GET', ''],
    ['DELETE', ''],
    ['GET', '/events'],
    ['GET', '/results'],
  ] as const)('are a 404: %s %s', async (method, path) => {
    const { app } = await serviceWith(0, 0);
    const answer = await app.inject({ method, url: `/v1/screenings/${NOBODY}${path}` });
    expect([answer.statusCode, answer.json().type]).toEqual([404, 'urn:holdfast:problem:screening-not-found']);
  });
});

describe('the list of screenings', () => {
  it('is paged, newest first', async () => {
    const service = await serviceWith(1, 1);
    const ids: string[] = [];
    for (let index = 0; index < 3; index += 1) ids.unshift((await ask(service, { ...ALL, counts: [index + 1] })).json().id);
    const first = (await service.get('/v1/screenings?limit=2')).json();
    expect(first.items.map(({ id }: Loose) => id)).toEqual(ids.slice(0, 2));
    const second = (await service.get(`/v1/screenings?limit=2&cursor=${first.nextCursor}`)).json();
    expect(second.items.map(({ id }: Loose) => id)).toEqual(ids.slice(2));
    expect(second.nextCursor).toBeNull();
    expect((await service.get('/v1/screenings?cursor=other')).statusCode).toBe(400);
  });
});

describe('the badge of a screened pair', () => {
  it('shows the verdict of the screening', async () => {
    const service = await serviceWith(1, 1, fakeQueue());
    const { id } = (await ask(service, ALL)).json();
    await finished(service, id);
    const badge = await service.get(`/v1/badges/${dimmerId(0)}/${lampId(0)}.json`);
    expect(badge.json()).toMatchObject({ grade: 'suitable' });
  });
});
