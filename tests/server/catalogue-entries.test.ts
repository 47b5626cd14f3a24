import { describe, expect, it } from 'vitest';
import { testApp } from '../support/server-app.ts';
import { dimmerEntry, lampEntry, send } from '../support/server-entries.ts';

describe('PUT /v1/lamps/{id}', () => {
  it('creates an entry with revision 1 and says where it is', async () => {
    const app = await testApp();
    const answer = await send(app, 'PUT', '/v1/lamps/candle-8', lampEntry());
    expect([answer.statusCode, answer.headers.location, answer.headers.etag]).toEqual([201, '/v1/lamps/candle-8', '"1"']);
    expect(answer.json()).toMatchObject({
      id: 'candle-8',
      revision: 1,
      createdAt: '2026-03-02T08:00:00.000Z',
      name: 'Candle, warm white',
      lamp: { ratedPower_W: 8, load: { kind: 'iv-table' } },
    });
    expect((await app.get('/v1/lamps/candle-8')).json()).toEqual(answer.json());
  });

  it('makes no revision of the same entry put again, in whatever order of fields and tags, without asking for If-Match', async () => {
    const app = await testApp();
    await send(app, 'PUT', '/v1/lamps/a', lampEntry());
    const reordered = Object.fromEntries(Object.entries(lampEntry({ tags: ['landing', 'candle'] })).reverse());
    const answer = await send(app, 'PUT', '/v1/lamps/a', reordered, { 'if-match': '"7"' });
    expect([answer.statusCode, answer.json().revision]).toEqual([200, 1]);
  });

  it('makes a new revision of a changed entry, and keeps the old one readable', async () => {
    const app = await testApp();
    await send(app, 'PUT', '/v1/lamps/a', lampEntry());
    const answer = await send(app, 'PUT', '/v1/lamps/a', lampEntry({ name: 'Candle' }), { 'if-match': '"1"' });
    expect([answer.statusCode, answer.json().revision, answer.headers.etag]).toEqual([200, 2, '"2"']);
    expect((await app.get('/v1/lamps/a')).json().name).toBe('Candle');
    expect((await app.get('/v1/lamps/a?revision=1')).json()).toMatchObject({ revision: 1, name: 'Candle, warm white' });
    expect((await app.get('/v1/lamps/a?revision=3')).statusCode).toBe(404);
  });

  it('refuses a lost update with 412 and changes nothing', async () => {
    const app = await testApp();
    await send(app, 'PUT', '/v1/lamps/a', lampEntry());
    await send(app, 'PUT', '/v1/lamps/a', lampEntry({ name: 'Mine' }), { 'if-match': '"1"' });
    const late = await send(app, 'PUT', '/v1/lamps/a', lampEntry({ name: 'Yours' }), { 'if-match': '"1"' });
    expect([late.statusCode, late.json().type, late.headers.etag]).toEqual([412, 'urn:holdfast:problem:entry-was-changed', '"2"']);
    expect((await app.get('/v1/lamps/a')).json()).toMatchObject({ revision: 2, name: 'Mine' });
  });

  it.each<[string, { readonly [name: string]: string }, number]>([
    ['no header', {}, 428],
    ['If-Match: *', { 'if-match': '*' }, 200],
    ['a list with the right tag', { 'if-match': '"9", "1"' }, 200],
    ['a weak tag', { 'if-match': 'W/"1"' }, 412],
    ['a tag of another form', { 'if-match': '1' }, 412],
    ['If-None-Match: *', { 'if-none-match': '*' }, 412],
  ])('answers a change of an existing entry with %s', async (_, headers, status) => {
    const app = await testApp();
    await send(app, 'PUT', '/v1/dimmers/d', dimmerEntry());
    expect((await send(app, 'PUT', '/v1/dimmers/d', dimmerEntry({ note: 'By the stairs.' }), headers)).statusCode).toBe(status);
  });

  it.each<[string, { readonly [name: string]: string }, number]>([
    ['no header', {}, 201],
    ['If-None-Match: *', { 'if-none-match': '*' }, 201],
    ['If-Match: *', { 'if-match': '*' }, 412],
    ['a revision', { 'if-match': '"1"' }, 412],
  ])('answers the creation of an entry with %s', async (_, headers, status) => {
    expect((await send(await testApp(), 'PUT', '/v1/dimmers/d', dimmerEntry(), headers)).statusCode).toBe(status);
  });

  it.each([
    ['an id with a space', 'a%20b', lampEntry(), 'id'],
    ['an id that begins with a dot', '.a', lampEntry(), 'id'],
    ['an id of 65 characters', 'a'.repeat(65), lampEntry(), 'id'],
    ['a dimmer in place of a lamp', 'a', dimmerEntry(), 'dimmer'],
    ['a misspelt field', 'a', lampEntry({ articleNo: '1' }), 'articleNo'],
    ['a load that is not there', 'a', lampEntry({ lamp: { ratedPower_W: 8 } }), 'lamp.load'],
    ['an empty name', 'a', lampEntry({ name: '' }), 'name'],
    ['a name that begins with a space', 'a', lampEntry({ name: ' x' }), 'name'],
    ['a name with a control character', 'a', lampEntry({ name: 'a\u0007b' }), 'name'],
    ['a name that turns the writing direction round', 'a', lampEntry({ name: 'a\u202eb' }), 'name'],
    ['a note with half a surrogate pair', 'a', lampEntry({ note: 'a\ud800' }), 'note'],
    ['a tag twice', 'a', lampEntry({ tags: ['x', 'x'] }), 'tags'],
    ['21 tags', 'a', lampEntry({ tags: Array.from({ length: 21 }, (_, n) => `t${n}`) }), 'tags'],
  ])('refuses %s with its path', async (_, id, body, path) => {
    const answer = await send(await testApp(), 'PUT', `/v1/lamps/${id}`, body);
    expect(answer.statusCode).toBe(400);
    expect(answer.json().issues.map((issue: { path: string }) => issue.path)).toContain(path);
  });

  it('keeps a note of several lines as it is', async () => {
    const app = await testApp();
    await send(app, 'PUT', '/v1/lamps/a', lampEntry({ note: 'First.\r\n\tSecond: ü €.' }));
    expect((await app.get('/v1/lamps/a')).json().note).toBe('First.\r\n\tSecond: ü €.');
  });
});

describe('GET /v1/dimmers/{id}', () => {
  it('answers 304 to who has the latest revision already', async () => {
    const app = await testApp();
    await send(app, 'PUT', '/v1/dimmers/d', dimmerEntry());
    const known = await app.get('/v1/dimmers/d', { 'if-none-match': '"1"' });
    expect([known.statusCode, known.body, known.headers.etag]).toEqual([304, '', '"1"']);
    expect((await app.get('/v1/dimmers/d', { 'if-none-match': '"0"' })).statusCode).toBe(200);
  });

  it('keeps dimmers and lamps of the same id apart', async () => {
    const app = await testApp();
    await send(app, 'PUT', '/v1/dimmers/x', dimmerEntry());
    expect((await app.get('/v1/lamps/x')).statusCode).toBe(404);
  });
});

describe('DELETE /v1/dimmers/{id}', () => {
  it('takes the entry out of the catalogue but keeps its revisions, and goes on numbering where it is put back', async () => {
    const app = await testApp();
    await send(app, 'PUT', '/v1/dimmers/d', dimmerEntry());
    expect((await send(app, 'DELETE', '/v1/dimmers/d')).statusCode).toBe(204);
    expect((await app.get('/v1/dimmers/d')).json().type).toBe('urn:holdfast:problem:entry-not-found');
    expect((await app.get('/v1/dimmers/d?revision=1')).json().name).toBe('Landing dimmer, old');
    expect((await app.get('/v1/dimmers')).json().items).toEqual([]);
    expect((await send(app, 'DELETE', '/v1/dimmers/d')).statusCode).toBe(404);
    const back = await send(app, 'PUT', '/v1/dimmers/d', dimmerEntry());
    expect([back.statusCode, back.json().revision]).toEqual([201, 2]);
  });

  it('refuses with 412 where If-Match names another revision', async () => {
    const app = await testApp();
    await send(app, 'PUT', '/v1/dimmers/d', dimmerEntry());
    expect((await send(app, 'DELETE', '/v1/dimmers/d', undefined, { 'if-match': '"2"' })).statusCode).toBe(412);
    expect((await send(app, 'DELETE', '/v1/dimmers/d', undefined, { 'if-match': '"1"' })).statusCode).toBe(204);
  });
});
