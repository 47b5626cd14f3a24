import { describe, expect, it } from 'vitest';
import { readEntry } from '../../server/catalogue/entries.ts';
import { IMPORT_LIMITS } from '../../server/imports/import-limits.ts';
import { testApp } from '../support/server-app.ts';
import { importList, outcomes, sendList } from './import-call.ts';

const HEADER = 'id,ratedPower_W,load.kind\n';

/** Lamps of 40 W; those of the given rows (the header is 1) are wrong. */
function lamps(count: number, ...wrong: readonly number[]): string {
  const lines = Array.from({ length: count }, (_, index) => `lamp-${index},${wrong.includes(index + 2) ? 'much' : 40},resistive\n`);
  return HEADER + lines.join('');
}

async function app() {
  const test = await testApp();
  const count = (table: 'entries' | 'revisions' | 'import_rows' | 'imports') =>
    test.record.prepare<[], number>(`SELECT count(*) FROM ${table}`).pluck().get() ?? -1;
  return { ...test, count };
}

describe('an import', () => {
  it('with onError=skip keeps what is right, in one revision each, and says what is not', async () => {
    const test = await app();
    const imported = await importList(test.app, lamps(4, 3));
    expect(outcomes(imported)).toEqual(['2 created', '3 refused lamp.ratedPower_W', '4 created', '5 created']);
    expect(imported.summary).toEqual({
      rows: 4,
      created: 3,
      revised: 0,
      unchanged: 0,
      refused: 1,
      notKept: 0,
      kept: true,
      dryRun: false,
      stoppedAtRow: null,
    });
    expect([test.count('entries'), test.count('revisions')]).toEqual([3, 3]);
  });

  it.each([2, 5, 200, 301])('with onError=stop keeps nothing where row %i is wrong, and ends there', async (wrong) => {
    const test = await app();
    const imported = await importList(test.app, lamps(300, wrong), { query: '?onError=stop' });
    expect(imported.rows.length).toBe(wrong - 1);
    expect(imported.rows.slice(0, -1).every(({ outcome }) => outcome === 'not-kept')).toBe(true);
    expect(imported.rows.at(-1)).toMatchObject({ row: wrong, outcome: 'refused', issues: [{ path: 'lamp.ratedPower_W' }] });
    expect(imported.summary).toMatchObject({ kept: false, stoppedAtRow: wrong, refused: 1, notKept: wrong - 2, created: 0 });
    expect(test.count('entries')).toBe(0);
  });

  it('with onError=stop stops at a second row of one id as well', async () => {
    const test = await app();
    const imported = await importList(test.app, `${lamps(100)}lamp-3,40,resistive\n${lamps(0)}more,40,resistive\n`, {
      query: '?onError=stop',
    });
    expect(imported.rows.at(-1)).toMatchObject({ row: 102, id: 'lamp-3', outcome: 'refused' });
    expect(test.count('entries')).toBe(0);
  });

  it('with onError=stop keeps all where nothing is wrong', async () => {
    const test = await app();
    const { summary } = await importList(test.app, lamps(300), { query: '?onError=stop' });
    expect(summary).toMatchObject({ created: 300, kept: true, stoppedAtRow: null });
    expect(test.count('entries')).toBe(300);
  });

  it('as a dry run says the same for each row as the import that follows it, and keeps nothing', async () => {
    const test = await app();
    await importList(test.app, `${HEADER}lamp-0,40,resistive\nlamp-1,60,resistive\n`);
    const before = [test.count('entries'), test.count('revisions')];
    const dry = await importList(test.app, lamps(300, 9), { query: '?dryRun=true' });
    expect([test.count('entries'), test.count('revisions')]).toEqual(before);
    expect(dry.summary).toMatchObject({ dryRun: true, kept: false, created: 297, revised: 1, unchanged: 1, refused: 1 });
    const real = await importList(test.app, lamps(300, 9));
    expect(real.rows).toEqual(dry.rows);
    expect(real.summary).toEqual({ ...dry.summary, dryRun: false, kept: true });
  });

  it('changes nothing the second time, and what differs the third', async () => {
    const test = await app();
    await importList(test.app, lamps(3));
    expect((await importList(test.app, lamps(3))).summary).toMatchObject({ unchanged: 3 });
    const third = await importList(test.app, lamps(3).replace('lamp-1,40', 'lamp-1,25'));
    expect(outcomes(third)).toEqual(['2 unchanged', '3 revised', '4 unchanged']);
    expect(readEntry(test.entries, 'lamp', 'lamp-1')).toMatchObject({ revision: 2, lamp: { ratedPower_W: 25 } });
  });

  it('leaves nothing of itself in the record', async () => {
    const test = await app();
    for (const query of ['', '?onError=stop', '?dryRun=true']) await importList(test.app, lamps(300, 250), { query });
    await sendList(test.app, `${lamps(300)}"`);
    await test.app.close();
    expect([test.count('imports'), test.count('import_rows')]).toEqual([0, 0]);
  });

  it('takes a list that is far longer than other calls’ bodies may be', async () => {
    const test = await app();
    const note = 'n'.repeat(1900);
    const lines = Array.from(
      { length: 700 },
      (_, index) => `${JSON.stringify({ id: `lamp-${index}`, note, lamp: { load: { kind: 'resistive', resistance_Ohm: 960 } } })}\n`,
    );
    const { summary } = await importList(test.app, lines.join(''), { type: 'application/x-ndjson' });
    expect(summary).toMatchObject({ created: 700 });
  });
});

describe('a list that is too large', () => {
  const limits = { ...IMPORT_LIMITS, bytes: 20_000, rows: 100, rowLength: 1000 };
  const long = 'n'.repeat(1100);
  it.each([
    ['in bytes', 'text/csv', lamps(99) + ' '.repeat(20_000), /longer than 20000 bytes/],
    ['in rows', 'text/csv', lamps(100), /more than 100 rows/],
    ['in blank rows and a last one', 'text/csv', `${HEADER}${'\n'.repeat(150)}lamp-1,40,resistive\n`, /more than 100 rows/],
    ['in its header', 'text/csv', `id,${long}`, /first row is longer than 1000 characters/],
    ['in one CSV row', 'text/csv', `${HEADER}hall,40,${long}\n`, /longer than 1000 characters/],
    ['in a quote that swallows the rest', 'text/csv', `${HEADER}"hall,40,resistive\n${lamps(90)}`, /longer than 1000 characters/],
    ['in NDJSON rows', 'application/x-ndjson', '{"id":"a"}\n'.repeat(101), /more than 100 rows/],
    ['in one NDJSON line', 'application/x-ndjson', `{"id":"${long}"}\n`, /longer than 1000 characters/],
    ['in an NDJSON line without an end', 'application/x-ndjson', '['.repeat(19_000), /longer than 1000 characters/],
    ['in array elements', 'application/json', `[${'5,'.repeat(100)}5]`, /more than 100 rows/],
    ['in one array element', 'application/json', `[{"id":"${long}"}]`, /Element 1 is longer than 1000 characters/],
    ['in an array element without an end', 'application/json', `[${'['.repeat(19_000)}`, /Element 1 is longer than 1000 characters/],
  ])('%s is refused whole', async (_, type, list, says) => {
    const { app: limited, record } = await testApp({ importLimits: limits });
    const answer = await sendList(limited, list, { type });
    expect([answer.statusCode, answer.json().type]).toEqual([413, 'urn:holdfast:problem:list-too-large']);
    expect(answer.json().detail).toMatch(says);
    expect(record.prepare('SELECT count(*) FROM entries').pluck().get()).toBe(0);
  });

  it('by nothing is taken', async () => {
    const { app: limited } = await testApp({ importLimits: { bytes: Buffer.byteLength(lamps(99)), rows: 100, rowLength: 40 } });
    expect((await importList(limited, lamps(99))).summary.created).toBe(99);
  });
});

describe('a call that is wrong', () => {
  it.each([
    ['?onError=maybe', 'onError'],
    ['?onError=skip&onError=stop', 'onError'],
    ['?dryRun=1', 'dryRun'],
    ['?dryRun=', 'dryRun'],
    ['?decimal=dot', 'decimal'],
    ['?dryrun=true', 'dryrun'],
  ])('by %s is refused and names %s', async (query, path) => {
    const test = await app();
    const answer = await sendList(test.app, lamps(1), { query });
    expect([answer.statusCode, answer.json().issues[0].path]).toEqual([400, path]);
    expect(test.count('entries')).toBe(0);
  });

  it.each(['text/plain', 'application/xml', 'text/csv; charset=ebcdic', 'application/vnd.ms-excel', 'nonsense'])(
    'by the type %s is refused with 415, which says what is read',
    async (type) => {
      const test = await app();
      const answer = await sendList(test.app, lamps(1), { type });
      expect([answer.statusCode, answer.json().type]).toEqual([415, 'urn:holdfast:problem:unsupported-media-type']);
      expect(answer.json().detail).toMatch(/text\/csv|utf-16le/);
    },
  );

  it('by a compressed body is refused with 415', async () => {
    const test = await app();
    const headers = { 'content-type': 'text/csv', 'content-encoding': 'gzip' };
    const answer = await test.app.inject({ method: 'POST', url: '/v1/imports/lamps', headers, payload: lamps(1) });
    expect(answer.statusCode).toBe(415);
  });

  it('by having no body is refused', async () => {
    const test = await app();
    expect((await test.app.inject({ method: 'POST', url: '/v1/imports/lamps' })).statusCode).toBe(415);
  });
});
