import { describe, expect, it } from 'vitest';
import { testApp } from '../support/server-app.ts';
import { dimmerEntry, lampEntry, send } from '../support/server-entries.ts';
import type { Loose } from '../support/server-pairings.ts';

interface Page {
  readonly items: readonly { readonly id: string }[];
  readonly nextCursor: string | null;
}

async function guestHouse() {
  const app = await testApp();
  const lamp = lampEntry().lamp;
  const entries: readonly (readonly [string, Loose])[] = [
    ['candle-5', lampEntry({ name: 'Candle, clear', articleNumber: 'GH-1', tags: ['candle'], lamp: { ...lamp, ratedPower_W: 5 } })],
    ['candle-8', lampEntry({ name: 'Candle Äpfel-Saal', articleNumber: 'GH-2', tags: ['candle', 'hall'] })],
    ['spot-3', lampEntry({ name: 'Spotlight for the hall', tags: ['hall'], lamp: { ...lamp, ratedPower_W: 3 } })],
    ['unnamed', { lamp: { load: { kind: 'resistive', resistance_Ohm: 900 } } }],
  ];
  for (const [id, entry] of entries) await send(app, 'PUT', `/v1/lamps/${id}`, entry);
  const found = async (query: string) => ((await app.get(`/v1/lamps?${query}`)).json() as Page).items.map(({ id }) => id);
  return { app, found };
}

describe('GET /v1/lamps', () => {
  it('lists headings in the order of ids', async () => {
    const { app } = await guestHouse();
    const { items, nextCursor } = (await app.get('/v1/lamps')).json();
    expect(items.map(({ id }: { id: string }) => id)).toEqual(['candle-5', 'candle-8', 'spot-3', 'unnamed']);
    expect(nextCursor).toBeNull();
    expect(items[1]).toEqual({
      id: 'candle-8',
      revision: 1,
      name: 'Candle Äpfel-Saal',
      articleNumber: 'GH-2',
      ratedPower_W: 8,
      tags: ['candle', 'hall'],
      revisedAt: '2026-03-02T08:00:00.000Z',
    });
  });

  it.each([
    ['name=cand', ['candle-5', 'candle-8']],
    ['name=HALL+spot', ['spot-3']],
    ['name=apfel', ['candle-8']],
    ['name=andle', []],
    ['tag=hall', ['candle-8', 'spot-3']],
    ['tag=Hall', []],
    ['articleNumber=GH-1', ['candle-5']],
    ['ratedPowerFrom_W=4', ['candle-5', 'candle-8']],
    ['ratedPowerTo_W=5', ['candle-5', 'spot-3']],
    ['ratedPowerFrom_W=3.5&ratedPowerTo_W=7', ['candle-5']],
    ['tag=hall&ratedPowerTo_W=5', ['spot-3']],
    ['name=candle&tag=hall&articleNumber=GH-2&ratedPowerFrom_W=8&ratedPowerTo_W=8', ['candle-8']],
    ['name=candle&articleNumber=GH-3', []],
  ])('finds by %s', async (query, ids) => {
    expect(await (await guestHouse()).found(query)).toEqual(ids);
  });

  it('finds an edited entry by what it is now, and no longer by what it was', async () => {
    const { app, found } = await guestHouse();
    await send(app, 'PUT', '/v1/lamps/spot-3', lampEntry({ name: 'Reading light', tags: ['library'] }), { 'if-match': '"1"' });
    expect([await found('name=spot'), await found('tag=hall'), await found('ratedPowerTo_W=3')]).toEqual([[], ['candle-8'], []]);
    expect([await found('name=reading'), await found('tag=library')]).toEqual([['spot-3'], ['spot-3']]);
  });

  it('pages each entry once, while others are put and deleted', async () => {
    const { app } = await guestHouse();
    const first: Page = (await app.get('/v1/lamps?limit=2')).json();
    await send(app, 'PUT', '/v1/lamps/a-new-one', lampEntry());
    await send(app, 'DELETE', '/v1/lamps/candle-5');
    const second: Page = (await app.get(`/v1/lamps?limit=2&cursor=${first.nextCursor}`)).json();
    expect([...first.items, ...second.items].map(({ id }) => id)).toEqual(['candle-5', 'candle-8', 'spot-3', 'unnamed']);
    expect(second.nextCursor).toBeNull();
  });

  it.each([
    ['limit=0', 'limit'],
    ['cursor=x', 'cursor'],
    ['ratedPowerFrom_W=a', 'ratedPowerFrom_W'],
    ['tags=hall', 'tags'],
    ['tag=a&tag=b', 'tag'],
  ])('refuses %s with its path', async (query, path) => {
    const answer = await (await testApp()).get(`/v1/lamps?${query}`);
    expect([answer.statusCode, answer.json().issues[0].path]).toEqual([400, path]);
  });

  it('gives short pages with a next one where many entries are looked at in vain, and finds all in the end', async () => {
    const { get, entries } = await testApp();
    entries.together(() => {
      for (let number = 0; number < 6_000; number += 1) {
        const id = `l${String(number).padStart(5, '0')}`;
        const ratedPower = number % 5_500 === 0 ? 7 : 5;
        const write = { kind: 'lamp' as const, id, content: '{}', circuit: '{}', name: null, articleNumber: null };
        entries.put({ ...write, ratedPower, words: ['lamp'], tags: ['all'] }, '2026-03-02T08:00:00.000Z');
      }
    });
    const seen: string[] = [];
    let pages = 0;
    let cursor: string | null = '';
    while (cursor !== null) {
      const page: Page = (await get(`/v1/lamps?tag=all&name=lamp&ratedPowerFrom_W=6${cursor === '' ? '' : `&cursor=${cursor}`}`)).json();
      seen.push(...page.items.map(({ id }) => id));
      cursor = page.nextCursor;
      pages += 1;
    }
    expect(seen).toEqual(['l00000', 'l05500']);
    expect(pages).toBe(2);
  });
});

describe('GET /v1/dimmers', () => {
  it('takes the rated maximum load for the rated power', async () => {
    const app = await testApp();
    const { dimmer } = dimmerEntry();
    await send(app, 'PUT', '/v1/dimmers/d-300', dimmerEntry({ dimmer: { ...dimmer, ratings: { maximumLoad_W: 300 } } }));
    await send(app, 'PUT', '/v1/dimmers/d-open', dimmerEntry());
    expect(((await app.get('/v1/dimmers?ratedPowerFrom_W=200')).json() as Page).items.map(({ id }) => id)).toEqual(['d-300']);
  });
});
