import { describe, expect, it } from 'vitest';
import { readyAnswers } from '../../server/ready-answers.ts';
import { listenOnAnyPort, testApp } from '../support/server-app.ts';
import { dimmerEntry, lampEntry, send } from '../support/server-entries.ts';
import { CANNED_JUDGEMENT, fakeSimulation } from '../support/server-fake-simulation.ts';

const BADGE = '/v1/badges/hall/candle.svg?count=4';

/** A pair judged suitable, and the service listening: what is ready is answered in front of the application, which `inject` goes past. */
async function listening() {
  const app = await testApp({ simulation: fakeSimulation(async () => ({ ok: true, value: { ...CANNED_JUDGEMENT, grade: 'suitable' } })) });
  await send(app, 'PUT', '/v1/dimmers/hall', dimmerEntry());
  await send(app, 'PUT', '/v1/lamps/candle', lampEntry());
  const pairing = { mains: { voltage_V: 230, frequency_Hz: 50 }, dimmer: { dimmerId: 'hall' }, lamps: [{ lampId: 'candle', count: 4 }] };
  const { id } = (await app.post(pairing)).json();
  const address = `http://127.0.0.1:${await listenOnAnyPort(app.app)}`;
  const ask = async (path: string, init: RequestInit = {}) => {
    const answer = await fetch(address + path, init);
    const headers = Object.fromEntries(answer.headers);
    return { status: answer.status, body: await answer.text(), headers };
  };
  return { ...app, ask, verdict: `/v1/verdicts/${id}` };
}

const withoutOwn = ({ 'x-request-id': _id, date: _date, ...headers }: Record<string, string>) => headers;

describe('an answer that is ready', () => {
  it.each(['badge', 'verdict'] as const)(
    'of a %s is the one that the application gave, headers and all, with an id of its own',
    async (of) => {
      const { ask, verdict, get } = await listening();
      const path = of === 'badge' ? BADGE : verdict;
      const [first, second, third] = [await ask(path), await ask(path), await ask(path, { headers: { 'x-request-id': 'mine' } })];
      expect([second.status, second.body]).toEqual([200, first.body]);
      expect(withoutOwn(second.headers)).toEqual(withoutOwn(first.headers));
      expect(second.headers['x-request-id']).not.toBe(first.headers['x-request-id']);
      expect(third.headers['x-request-id']).toBe('mine');
      expect((await get(path)).body).toBe(first.body);
    },
  );

  it('is 304 to who has it, with the headers that may be needed', async () => {
    const { ask } = await listening();
    const { headers } = await ask(BADGE);
    const known = { headers: { 'if-none-match': headers.etag ?? '' } };
    const inFront = await ask(BADGE, known);
    expect([inFront.status, inFront.body]).toEqual([304, '']);
    const other = await ask(BADGE.replace('4', '5'), known);
    expect(other.status).toBe(200);
    const byApplication = await (await listening()).ask(BADGE, known);
    expect(byApplication.status).toBe(304);
    for (const name of ['etag', 'cache-control', 'access-control-allow-origin', 'cross-origin-resource-policy']) {
      expect([name, inFront.headers[name]]).toEqual([name, byApplication.headers[name]]);
    }
  });

  it('is not given once it does not hold', async () => {
    const { ask, app } = await listening();
    for (let time = 0; time < 2; time += 1) expect((await ask(BADGE)).body).toContain('Suitable');
    await send({ app }, 'PUT', '/v1/dimmers/hall', dimmerEntry({ note: 'Words only.' }), { 'if-match': '*' });
    for (let time = 0; time < 2; time += 1) expect((await ask(BADGE)).body).toContain('Suitable');
    const edited = dimmerEntry({ dimmer: { ...dimmerEntry().dimmer, latchingCurrent_mA: 70 } });
    await send({ app }, 'PUT', '/v1/dimmers/hall', edited, { 'if-match': '*' });
    for (let time = 0; time < 2; time += 1) expect((await ask(BADGE)).body).toContain('Not screened');
    await send({ app }, 'DELETE', '/v1/dimmers/hall');
    for (let time = 0; time < 2; time += 1) expect((await ask(BADGE)).status).toBe(404);
  });

  it('is for reading alone, and each address has its own', async () => {
    const { ask, verdict } = await listening();
    await ask(verdict);
    expect((await ask(verdict, { method: 'DELETE' })).status).toBe(404);
    expect(await ask(verdict, { method: 'HEAD' })).toMatchObject({ status: 200, body: '' });
    expect(Object.keys(JSON.parse((await ask(`${verdict}?fields=grade`)).body))).toEqual(['grade']);
    expect(Object.keys(JSON.parse((await ask(verdict)).body)).length).toBeGreaterThan(5);
  });

  it('is counted like any other', async () => {
    const { ask } = await listening();
    for (let time = 0; time < 3; time += 1) await ask(BADGE);
    const { body } = await ask('/metrics');
    expect(body).toContain('holdfast_http_requests_total{method="GET",route="/v1/badges/:dimmerId/:lampId.svg",status="200"} 3\n');
  });

  it('is no longer given when the service stops', async () => {
    const { ask, app } = await listening();
    await ask(BADGE);
    app.isStopping = true;
    expect(await ask(BADGE)).toMatchObject({ status: 503, headers: { connection: 'close' } });
  });

  it('makes room for others once all of them weigh too much, and spares once what was asked for', () => {
    const ready = readyAnswers(10_000);
    const ask = (url: string) => {
      const written: number[] = [];
      const response = { writeHead: (status: number) => void written.push(status), end: () => undefined };
      return ready.answer({ method: 'GET', url, headers: {} } as never, response as never)?.status;
    };
    const give = (url: string) => {
      const reply = { header: () => reply, type: () => reply, code: () => reply, send: () => reply, getHeaders: () => ({}) };
      const request = { raw: { url }, headers: {}, routeOptions: { url } };
      ready.send(request as never, reply as never, { type: 'text/plain', text: 'x'.repeat(1_000), holds: () => true });
    };
    for (const url of ['/a', '/b', '/c']) give(url);
    expect([ask('/a'), ask('/c')]).toEqual([200, 200]);
    give('/d');
    expect([ask('/b'), ask('/d')]).toEqual([undefined, 200]);
    // Nobody asked for `/a` since it was spared.
    give('/e');
    expect([ask('/a'), ask('/c'), ask('/d'), ask('/e')]).toEqual([undefined, 200, 200, 200]);
  });
});
