import { describe, expect, it } from 'vitest';
import type { AskedJudgement } from '../../server/simulation/asked-circuit.ts';
import type { Simulated } from '../../server/simulation/simulation.ts';
import { testApp } from '../support/server-app.ts';
import { CANNED_JUDGEMENT, fakeSimulation, pending } from '../support/server-fake-simulation.ts';
import { briefPairing, examplePairing, fullPairing } from '../support/server-pairings.ts';

/** A busy machine may take long to do what is waited for; nothing here is measured in time. */
const PATIENCE = { timeout: 60_000 };

describe('POST /v1/verdicts', () => {
  it('judges a new pairing with the model and says where the verdict is', async () => {
    const { post, get } = await testApp();
    const answer = await post(briefPairing());
    expect(answer.statusCode).toBe(201);
    const verdict = answer.json();
    expect(answer.headers.location).toBe(`/v1/verdicts/${verdict.id}`);
    expect(verdict).toMatchObject({
      id: expect.stringMatching(/^[0-9a-f]{26}$/),
      createdAt: '2026-03-02T08:00:00.000Z',
      grade: 'suitable',
      dial: [{ sweep: 'up', position_pct: 60, state: 'steady', firings: { min: 1, mean: 1, max: 1 } }],
    });
    expect(verdict.cautions.join(' ')).toMatch(
      /Mains voltage can kill.*not a type test.*runs hot.*makers' instructions.*of a measured circuit/s,
    );
    expect((await get(answer.headers.location as string)).json()).toEqual(verdict);
  });

  it('answers the same question with the stored verdict, without simulating again', async () => {
    const simulation = fakeSimulation();
    const { post, verdicts } = await testApp({ simulation });
    const first = await post(examplePairing());
    const second = await post(examplePairing());
    expect([first.statusCode, second.statusCode]).toEqual([201, 200]);
    expect(second.json()).toEqual(first.json());
    expect(second.headers.location).toBe(first.headers.location);
    expect([simulation.asked(), verdicts.count()]).toEqual([1, 1]);
  });

  it('takes an empty object for one left out, and another order of fields for the same question', async () => {
    const simulation = fakeSimulation();
    const { post, verdicts } = await testApp({ simulation });
    const first = (await post(examplePairing())).json();
    const emptied = examplePairing();
    emptied.dimmer.choke = {};
    emptied.options = {};
    emptied.addedLoad = null;
    const reordered = Object.fromEntries(Object.entries(examplePairing()).reverse());
    for (const again of [emptied, reordered]) {
      const answer = await post(again);
      expect([answer.statusCode, answer.json().id]).toEqual([200, first.id]);
    }
    expect([simulation.asked(), verdicts.count()]).toEqual([1, 1]);
  });

  it('takes any other input, options included, for another question', async () => {
    const { post, verdicts } = await testApp({ simulation: fakeSimulation() });
    const changes = [
      (p: ReturnType<typeof examplePairing>) => p,
      (p: ReturnType<typeof examplePairing>) => Object.assign(p, { options: { dialPositions_pct: [50] } }),
      (p: ReturnType<typeof examplePairing>) => Object.assign(p, { options: { dropOutAngle_deg: 11 } }),
      (p: ReturnType<typeof examplePairing>) => Object.assign(p, { addedLoad: { kind: 'resistor', resistance_kOhm: 10 } }),
      (p: ReturnType<typeof examplePairing>) => Object.assign(p.lamps[0], { count: 5 }) && p,
    ];
    for (const change of changes) expect((await post(change(examplePairing()))).statusCode).toBe(201);
    expect(verdicts.count()).toBe(changes.length);
  });

  it('takes a default that is written out, and a judged pairing sent back, for questions of their own: less was assumed', async () => {
    const { post } = await testApp({ simulation: fakeSimulation() });
    const first = (await post(examplePairing())).json();
    const writtenOut = examplePairing();
    writtenOut.dimmer.choke = { inductance_mH: 0.1 };
    const partly = (await post(writtenOut)).json();
    const judged = (await post(first.pairing)).json();
    const paths = (verdict: { assumptions: { path: string }[] }) => verdict.assumptions.map(({ path }) => path);
    expect(new Set([first.id, partly.id, judged.id]).size).toBe(3);
    expect([partly.pairing, judged.pairing]).toEqual([first.pairing, first.pairing]);
    expect(paths(first).filter((path) => !paths(partly).includes(path))).toEqual(['dimmer.choke.inductance_mH']);
    expect(paths(judged).filter((path) => !path.startsWith('model.'))).toEqual([]);
    // each keeps what was assumed for it
    expect((await post(examplePairing())).json()).toEqual(first);
  });

  it('simulates once for callers that ask the same at the same time', async () => {
    const { promise, resolve } = pending<Simulated<AskedJudgement>>();
    const simulation = fakeSimulation(() => promise);
    const { post, verdicts } = await testApp({ simulation });
    const asking = [post(examplePairing()), post(examplePairing()), post(examplePairing())];
    await expect.poll(() => simulation.asked(), PATIENCE).toBe(1);
    await new Promise(setImmediate);
    resolve({ ok: true, value: CANNED_JUDGEMENT });
    const answers = await Promise.all(asking);
    expect(answers.map(({ statusCode }) => statusCode).sort()).toEqual([200, 200, 201]);
    expect(new Set(answers.map(({ body }) => body)).size).toBe(1);
    expect([simulation.asked(), verdicts.count()]).toEqual([1, 1]);
  });

  it('lists every default that was filled in, and what the model takes for granted', async () => {
    const { post } = await testApp({ simulation: fakeSimulation() });
    const { assumptions, pairing } = (await post(examplePairing())).json();
    expect(assumptions).toContainEqual({ path: 'dimmer.choke.inductance_mH', value: 0.1, basis: expect.stringMatching(/memory/) });
    expect(assumptions).toContainEqual({ path: 'model.bridgeDrop_V', value: 1.4, basis: expect.stringMatching(/fixed in the model/) });
    expect(pairing.dimmer.choke.inductance_mH).toBe(0.1);
  });

  it('answers 503 with Retry-After when the queue is full, and stores nothing', async () => {
    const simulation = fakeSimulation(async () => ({ ok: false, failure: { kind: 'queue-full', retryAfter_s: 7 } }));
    const { post, verdicts } = await testApp({ simulation });
    const answer = await post(examplePairing());
    expect([answer.statusCode, answer.headers['retry-after'], answer.json().type]).toEqual([503, '7', 'urn:holdfast:problem:queue-full']);
    expect(verdicts.count()).toBe(0);
  });

  it('asks again after a failure: a question that failed once is not stuck', async () => {
    let full = true;
    const simulation = fakeSimulation(async () =>
      full ? { ok: false, failure: { kind: 'queue-full', retryAfter_s: 1 } } : { ok: true, value: CANNED_JUDGEMENT },
    );
    const { post } = await testApp({ simulation });
    expect((await post(examplePairing())).statusCode).toBe(503);
    full = false;
    expect((await post(examplePairing())).statusCode).toBe(201);
  });

  it('answers 422 with the places when the model refuses the circuit', async () => {
    const issues = [{ path: 'dimmer.drive', message: 'must be another' }];
    const simulation = fakeSimulation(async () => ({ ok: false, failure: { kind: 'invalid-pairing', issues } }));
    const answer = await (await testApp({ simulation })).post(examplePairing());
    expect([answer.statusCode, answer.json().type]).toEqual([422, 'urn:holdfast:problem:pairing-cannot-be-simulated']);
    expect(answer.json().issues).toEqual(issues);
  });

  it('tells the log, not the client, what went wrong inside', async () => {
    const simulation = fakeSimulation(() => Promise.reject(new Error('secret path /srv/secret')));
    const { post, logged, verdicts } = await testApp({ simulation });
    const answer = await post(examplePairing());
    expect([answer.statusCode, answer.json().type]).toEqual([500, 'urn:holdfast:problem:internal']);
    expect(answer.body).not.toMatch(/secret/);
    const entry = logged.map((line) => JSON.parse(line)).find(({ msg }) => msg === 'request failed');
    expect(entry).toMatchObject({ err: { message: 'secret path /srv/secret' }, reqId: answer.json().requestId });
    expect(verdicts.count()).toBe(0);
  });

  it.each(['diac', 'timed'] as const)('judges a pairing in which every field is given, with a %s drive', async (drive) => {
    const { post } = await testApp();
    const answer = await post(fullPairing(drive));
    expect(answer.statusCode).toBe(201);
    const { dial, assumptions } = answer.json();
    expect(dial).toHaveLength(6);
    expect(assumptions.map(({ path }: { path: string }) => path).filter((path: string) => !path.startsWith('model.'))).toEqual([]);
  });
});

describe('GET /v1/verdicts/{id}', () => {
  it('answers 404 for an id under which nothing is stored', async () => {
    const answer = await (await testApp()).get(`/v1/verdicts/${'0'.repeat(26)}`);
    expect([answer.statusCode, answer.json().type]).toEqual([404, 'urn:holdfast:problem:verdict-not-found']);
  });
});

describe('GET /v1/verdicts', () => {
  async function withVerdicts(count: number) {
    let next = 0;
    const grades = ['suitable', 'unsuitable'] as const;
    const simulation = fakeSimulation(async () => ({ ok: true, value: { ...CANNED_JUDGEMENT, grade: grades[next++ % 2] ?? 'suitable' } }));
    const app = await testApp({ simulation });
    const ids: string[] = [];
    for (let lamps = 1; lamps <= count; lamps += 1) {
      const pairing = examplePairing();
      pairing.lamps[0].count = lamps;
      if (lamps === 3) pairing.mains = { voltage_V: 120, frequency_Hz: 60 };
      ids.unshift((await app.post(pairing)).json().id);
    }
    return { ...app, ids };
  }

  interface Page {
    readonly items: readonly { readonly id: string; readonly grade: string }[];
    readonly nextCursor: string | null;
  }

  it('pages newest first, each verdict once, and ends with no cursor', async () => {
    const { get, ids } = await withVerdicts(5);
    const seen: string[] = [];
    let url = '/v1/verdicts?limit=2';
    for (;;) {
      const page: Page = (await get(url)).json();
      seen.push(...page.items.map(({ id }) => id));
      if (page.nextCursor === null) break;
      url = `/v1/verdicts?limit=2&cursor=${page.nextCursor}`;
    }
    expect(seen).toEqual(ids);
  });

  it('does not shift a page when verdicts arrive between two pages', async () => {
    const { get, post, ids } = await withVerdicts(4);
    const first: Page = (await get('/v1/verdicts?limit=2')).json();
    await post(briefPairing());
    const second: Page = (await get(`/v1/verdicts?limit=2&cursor=${first.nextCursor}`)).json();
    expect([...first.items, ...second.items].map(({ id }) => id)).toEqual(ids);
  });

  it('lists 20 unless told otherwise', async () => {
    const { get } = await withVerdicts(21);
    expect(((await get('/v1/verdicts')).json() as Page).items).toHaveLength(20);
  });

  it('filters by grade, mains and model version', async () => {
    const { get, ids } = await withVerdicts(4);
    const found = async (query: string) => ((await get(`/v1/verdicts?${query}`)).json() as Page).items.map(({ id }) => id);
    expect(await found('grade=unsuitable')).toEqual([ids[0], ids[2]]);
    expect(await found('mainsVoltage_V=120&mainsFrequency_Hz=60')).toEqual([ids[1]]);
    expect(await found('modelVersion=none')).toEqual([]);
    expect(await found('grade=suitable&mainsVoltage_V=230')).toEqual([ids[3]]);
  });

  it('shows headings without the evidence', async () => {
    const { get } = await withVerdicts(1);
    const { items } = (await get('/v1/verdicts')).json();
    expect(Object.keys(items[0]).sort()).toEqual(['count', 'createdAt', 'grade', 'id', 'judgedFor', 'mains', 'modelVersion', 'summary']);
  });

  it('is empty before anything was judged', async () => {
    expect((await (await testApp()).get('/v1/verdicts')).json()).toEqual({ items: [], nextCursor: null });
  });
});
