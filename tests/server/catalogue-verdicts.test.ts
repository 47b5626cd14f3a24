import { describe, expect, it } from 'vitest';
import type { Grade } from '../../model/index.ts';
import { testApp } from '../support/server-app.ts';
import { dimmerEntry, lampEntry, send } from '../support/server-entries.ts';
import { CANNED_JUDGEMENT, fakeSimulation } from '../support/server-fake-simulation.ts';
import { examplePairing, type Loose } from '../support/server-pairings.ts';

const MAINS = { voltage_V: 230, frequency_Hz: 50 };

/** A guest house of two dimmers and two lamps; `judge` asks by reference. The simulation gives `grades` in turn, then suitable. */
async function guestHouse(grades: readonly Grade[] = []) {
  const left = [...grades];
  const simulation = fakeSimulation(async () => ({ ok: true, value: { ...CANNED_JUDGEMENT, grade: left.shift() ?? 'suitable' } }));
  let time = Date.parse('2026-03-02T08:00:00.000Z');
  const now = () => {
    time += 1000;
    return new Date(time);
  };
  const app = await testApp({ simulation, now });
  const { dimmer } = dimmerEntry();
  const { lamp } = lampEntry();
  await send(app, 'PUT', '/v1/dimmers/hall', dimmerEntry({ name: 'Hall' }));
  await send(app, 'PUT', '/v1/dimmers/landing', dimmerEntry({ name: 'Landing', dimmer: { ...dimmer, holdingCurrent_mA: 20 } }));
  await send(app, 'PUT', '/v1/lamps/candle', lampEntry());
  await send(app, 'PUT', '/v1/lamps/spot', lampEntry({ name: 'Spot', lamp: { ...lamp, ratedPower_W: 5 } }));
  const judge = async (dimmerId: string, lampId: string, count: number, changes: Loose = {}) =>
    app.post({ mains: MAINS, dimmer: { dimmerId }, lamps: [{ lampId, count }], ...changes });
  const list = async (path: string) => (await app.get(path)).json() as { items: Loose[]; nextCursor: string | null };
  const edit = async (path: string, body: Loose) => send(app, 'PUT', path, body, { 'if-match': '*' });
  return { ...app, simulation, judge, list, edit };
}

describe('a pairing by reference', () => {
  it('is the same question as the one in full', async () => {
    const { post, judge, simulation } = await guestHouse();
    const inFull = (await post(examplePairing())).json();
    const byReference = await judge('hall', 'candle', 4);
    expect([byReference.statusCode, byReference.json().id]).toEqual([200, inFull.id]);
    expect(byReference.json().pairing.dimmer.latchingCurrent_mA).toBe(60);
    expect(simulation.asked()).toBe(1);
  });

  it('may name some parts and give others in full', async () => {
    const { post, list } = await guestHouse();
    const { lamp } = lampEntry();
    const answer = await post({
      mains: MAINS,
      dimmer: dimmerEntry().dimmer,
      lamps: [
        { lampId: 'spot', count: 2 },
        { count: 1, lamp },
      ],
    });
    expect(answer.statusCode).toBe(201);
    expect((await list('/v1/verdicts')).items[0]?.judgedFor).toEqual([
      { dimmerId: null, dimmerRevision: null, lampId: 'spot', lampRevision: 1, count: 2, stale: false },
    ]);
  });

  it('refuses ids that the catalogue does not have, all of them with their paths', async () => {
    const { post, simulation } = await guestHouse();
    const lamps = [
      { lampId: 'candle', count: 1 },
      { lampId: 'gone', count: 1 },
    ];
    const answer = await post({ mains: MAINS, dimmer: { dimmerId: 'candle' }, lamps });
    expect([answer.statusCode, answer.json().type]).toEqual([422, 'urn:holdfast:problem:entries-not-known']);
    expect(answer.json().issues.map(({ path }: Loose) => path)).toEqual(['dimmer.dimmerId', 'lamps[1].lampId']);
    expect(simulation.asked()).toBe(0);
  });

  it('is judged as the latest revision says, and remembers which that was', async () => {
    const { judge, list, edit } = await guestHouse();
    const first = (await judge('hall', 'candle', 4)).json();
    await edit('/v1/lamps/candle', lampEntry({ lamp: { ...lampEntry().lamp, ratedPower_W: 9 } }));
    const second = (await judge('hall', 'candle', 4)).json();
    expect(second.id).not.toBe(first.id);
    const { items } = await list('/v1/verdicts?lampId=candle');
    expect(items.map(({ id, judgedFor }) => [id, judgedFor[0].lampRevision, judgedFor[0].stale])).toEqual([
      [second.id, 2, false],
      [first.id, 1, true],
    ]);
  });

  it('is stored once for two entries of the same circuit, and tied to both', async () => {
    const { app, judge, list, simulation } = await guestHouse();
    await send({ app }, 'PUT', '/v1/lamps/candle-again', lampEntry({ name: 'The same, from elsewhere' }));
    const first = (await judge('hall', 'candle', 4)).json();
    expect((await judge('hall', 'candle-again', 4)).json().id).toBe(first.id);
    expect(simulation.asked()).toBe(1);
    const [item] = (await list('/v1/verdicts?lampId=candle-again')).items;
    expect(item?.judgedFor.map(({ lampId }: Loose) => lampId)).toEqual(['candle', 'candle-again']);
  });
});

describe('a verdict of an entry that was edited or deleted', () => {
  it('is listed as stale, and stays readable', async () => {
    const { app, get, judge, list, edit } = await guestHouse();
    const hall = (await judge('hall', 'candle', 4)).json().id;
    const landing = (await judge('landing', 'candle', 4)).json().id;
    await edit('/v1/dimmers/hall', dimmerEntry({ dimmer: { ...dimmerEntry().dimmer, latchingCurrent_mA: 70 } }));
    const ids = async (query: string) => (await list(`/v1/verdicts?${query}`)).items.map(({ id }) => id);
    expect([await ids('stale=true'), await ids('stale=false')]).toEqual([[hall], [landing]]);
    await send({ app }, 'DELETE', '/v1/lamps/candle');
    expect([await ids('stale=true'), await ids('stale=false')]).toEqual([[landing, hall], []]);
    expect((await get(`/v1/verdicts/${hall}`)).statusCode).toBe(200);
    expect(await ids('lampId=candle')).toEqual([landing, hall]);
  });

  it('is not stale where only text was edited', async () => {
    const { judge, list, edit } = await guestHouse();
    await judge('hall', 'candle', 4);
    await edit('/v1/dimmers/hall', dimmerEntry({ name: 'Hall, by the door' }));
    expect((await list('/v1/verdicts?stale=true')).items).toEqual([]);
  });
});

describe('GET /v1/verdicts', () => {
  it('filters by count and by date', async () => {
    const { judge, list } = await guestHouse();
    const ids: string[] = [];
    for (const count of [1, 2, 3]) ids.push((await judge('hall', 'candle', count)).json().id);
    const found = async (query: string) => (await list(`/v1/verdicts?${query}`)).items.map(({ id }) => ids.indexOf(id) + 1);
    const { createdAt } = (await list(`/v1/verdicts?count=2`)).items[0] ?? {};
    expect(await found('count=3')).toEqual([3]);
    expect(await found(`createdFrom=${createdAt}`)).toEqual([3, 2]);
    expect(await found(`createdBefore=${createdAt}`)).toEqual([1]);
    expect(await found('createdFrom=2026-03-02&createdBefore=2026-03-03')).toEqual([3, 2, 1]);
    expect(await found('createdBefore=2026-03-02')).toEqual([]);
    expect(await found(`createdFrom=${encodeURIComponent('2026-03-02T23:30:00+02:00')}`)).toEqual([]);
  });

  it('shows the fields that are asked for and no others, the dial rows only where they are named', async () => {
    const { judge, list } = await guestHouse();
    const { id } = (await judge('hall', 'candle', 2)).json();
    expect((await list('/v1/verdicts?fields=id,count,grade')).items).toEqual([{ id, count: 2, grade: 'suitable' }]);
    const [item] = (await list('/v1/verdicts?fields=pairing,dial')).items;
    expect([Object.keys(item ?? {}), item?.pairing.lamps[0].count]).toEqual([['pairing', 'dial'], 2]);
  });

  it('gives a CSV to who prefers it, with the next page as a link', async () => {
    const { get, judge } = await guestHouse();
    await judge('hall', 'candle', 1);
    await judge('hall', 'candle', 2);
    const csv = await get('/v1/verdicts?limit=1&lampId=candle', { accept: 'text/csv' });
    expect(csv.headers['content-type']).toMatch(/^text\/csv/);
    const [heading, line, ...rest] = csv.body.split('\r\n');
    expect(heading).toBe(
      'id,createdAt,modelVersion,grade,summary,mainsVoltage_V,mainsFrequency_Hz,count,dimmerId,dimmerRevision,lampId,lampRevision,lampCount,stale',
    );
    expect(line).toMatch(/^[0-9a-f]{26},2026-03-02T.*Z,.*,suitable,Canned for a test\.,230,50,2,hall,1,candle,1,2,false$/);
    expect(rest).toEqual(['']);
    const next = /^<(.*)>; rel="next"$/.exec(csv.headers.link as string)?.[1] ?? '';
    const second = await get(next, { accept: 'text/csv' });
    expect(second.body.split('\r\n')[1]).toMatch(/,1,hall,1,candle,1,1,false$/);
    expect(second.headers.link).toBeUndefined();
    expect((await get('/v1/verdicts?fields=id', { accept: 'text/csv' })).json().issues[0].path).toBe('fields');
    expect((await get('/v1/verdicts', { accept: 'image/png' })).statusCode).toBe(406);
  });
});

describe('GET /v1/verdicts/{id}', () => {
  it('gives the fields that are asked for', async () => {
    const { get, judge } = await guestHouse();
    const { id } = (await judge('hall', 'candle', 1)).json();
    expect((await get(`/v1/verdicts/${id}?fields=grade,id`)).json()).toEqual({ grade: 'suitable', id });
    expect((await get(`/v1/verdicts/${id}?fields=`)).statusCode).toBe(400);
  });

  it('answers 304 to who has it already, and the same bytes however often it is asked', async () => {
    const { get, judge } = await guestHouse();
    const { id } = (await judge('hall', 'candle', 1)).json();
    const first = await get(`/v1/verdicts/${id}`);
    const second = await get(`/v1/verdicts/${id}`);
    expect([second.body, second.headers.etag]).toEqual([first.body, first.headers.etag]);
    const known = await get(`/v1/verdicts/${id}`, { 'if-none-match': `"other", ${first.headers.etag}` });
    expect([known.statusCode, known.body]).toEqual([304, '']);
    expect((await get(`/v1/verdicts/${id}`, { 'if-none-match': '"other"' })).statusCode).toBe(200);
  });
});

describe('GET /v1/lamps/{id}/dimmers and /v1/dimmers/{id}/lamps', () => {
  it('list what suits, by the verdicts that hold', async () => {
    const { judge, list, edit } = await guestHouse(['suitable', 'unsuitable', 'conditional']);
    await judge('hall', 'candle', 4);
    await judge('landing', 'candle', 4);
    await judge('landing', 'candle', 8);
    const { items } = await list('/v1/lamps/candle/dimmers');
    expect(items.map(({ dimmerId, name, count, grade }) => [dimmerId, name, count, grade])).toEqual([
      ['landing', 'Landing', 8, 'conditional'],
      ['hall', 'Hall', 4, 'suitable'],
    ]);
    expect((await list('/v1/lamps/candle/dimmers?grade=unsuitable&count=4')).items.map(({ dimmerId }) => dimmerId)).toEqual(['landing']);
    expect((await list('/v1/dimmers/hall/lamps')).items.map(({ lampId }) => lampId)).toEqual(['candle']);
    await edit('/v1/dimmers/hall', dimmerEntry({ dimmer: { ...dimmerEntry().dimmer, latchingCurrent_mA: 70 } }));
    expect((await list('/v1/dimmers/hall/lamps')).items).toEqual([]);
  });

  it('page in a stable order', async () => {
    const { judge, list } = await guestHouse();
    for (const count of [1, 2, 3]) await judge('hall', 'candle', count);
    const first = await list('/v1/lamps/candle/dimmers?limit=2');
    await judge('landing', 'candle', 1);
    const second = await list(`/v1/lamps/candle/dimmers?limit=2&cursor=${first.nextCursor}`);
    expect([...first.items, ...second.items].map(({ count }) => count)).toEqual([3, 2, 1]);
    expect(second.nextCursor).toBeNull();
  });

  it('do not count a verdict that was judged less strictly, with an added load, or in company', async () => {
    const { judge, post, list } = await guestHouse();
    await judge('hall', 'candle', 1, { options: { dialPositions_pct: [50] } });
    await judge('hall', 'candle', 1, { options: { corners: 'nominal' } });
    await judge('hall', 'candle', 1, { options: { dropOutAngle_deg: 60 } });
    await judge('hall', 'candle', 1, { addedLoad: { kind: 'resistor', resistance_kOhm: 10 } });
    const lamps = ['candle', 'spot'].map((lampId) => ({ lampId, count: 1 }));
    await post({ mains: MAINS, dimmer: { dimmerId: 'hall' }, lamps });
    expect((await list('/v1/lamps/candle/dimmers')).items).toEqual([]);
    expect((await list('/v1/verdicts?lampId=candle')).items).toHaveLength(5);
  });

  it('refuse an entry that is not there and a cursor of another list', async () => {
    const { get } = await guestHouse();
    expect((await get('/v1/lamps/nobody/dimmers')).json().type).toBe('urn:holdfast:problem:entry-not-found');
    expect((await get('/v1/lamps/candle/dimmers?cursor=abc')).json().issues[0].path).toBe('cursor');
    expect((await get('/v1/lamps/candle/dimmers?grade=fine')).json().issues[0].path).toBe('grade');
  });
});

describe('POST /v1/verdicts/lookup', () => {
  it('answers each pair for itself, in order', async () => {
    const app = await guestHouse();
    const judged = (await app.judge('hall', 'candle', 4)).json();
    await app.judge('landing', 'spot', 2);
    await app.edit('/v1/lamps/spot', lampEntry({ lamp: { ...lampEntry().lamp, ratedPower_W: 4 } }));
    const pairs = [
      { dimmerId: 'hall', lampId: 'candle', count: 4 },
      { dimmerId: 'hall', lampId: 'candle', count: 5 },
      { dimmerId: 'landing', lampId: 'spot', count: 2 },
      { dimmerId: 'nobody', lampId: 'candle', count: 1 },
      { dimmerId: 'hall', lampId: 'nobody', count: 1 },
    ];
    const answer = await send(app, 'POST', '/v1/verdicts/lookup', { pairs });
    expect(answer.statusCode).toBe(200);
    const { items } = answer.json();
    expect(items.map(({ outcome }: Loose) => outcome)).toEqual(['judged', 'not-screened', 'stale', 'unknown-dimmer', 'unknown-lamp']);
    expect(items[0]).toEqual({
      ...pairs[0],
      outcome: 'judged',
      verdict: {
        id: judged.id,
        modelVersion: judged.modelVersion,
        createdAt: judged.createdAt,
        grade: 'suitable',
        summary: 'Canned for a test.',
        mains: MAINS,
        dimmerRevision: 1,
        lampRevision: 1,
      },
    });
  });

  it('keeps to the mains where one is given', async () => {
    const app = await guestHouse();
    await app.judge('hall', 'candle', 4);
    const pairs = [{ dimmerId: 'hall', lampId: 'candle', count: 4 }];
    const at = async (mains: Loose) => (await send(app, 'POST', '/v1/verdicts/lookup', { pairs, mains })).json().items[0].outcome;
    expect([await at(MAINS), await at({ voltage_V: 120, frequency_Hz: 60 })]).toEqual(['judged', 'not-screened']);
  });

  it('takes 1,000 pairs and no more', async () => {
    const app = await guestHouse();
    const pairs = Array.from({ length: 1000 }, (_, index) => ({ dimmerId: 'hall', lampId: 'candle', count: (index % 500) + 1 }));
    expect((await send(app, 'POST', '/v1/verdicts/lookup', { pairs })).json().items).toHaveLength(1000);
    const tooMany = await send(app, 'POST', '/v1/verdicts/lookup', { pairs: [...pairs, pairs[0]] });
    expect([tooMany.statusCode, tooMany.json().issues[0].path]).toEqual([400, 'pairs']);
    expect((await send(app, 'POST', '/v1/verdicts/lookup', { pairs: [{ dimmerId: 'hall' }] })).statusCode).toBe(400);
  });
});
