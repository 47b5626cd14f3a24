import { once } from 'node:events';
import { describe, expect, it } from 'vitest';
import { listenOnAnyPort, type TestApp, testApp } from '../support/server-app.ts';
import { readReport } from './import-call.ts';
import { openUpload } from './open-upload.ts';

/** A busy machine may take long to do what is waited for; nothing here is measured in time. */
const PATIENCE = { timeout: 60_000 };

const HEADER = 'id,ratedPower_W,load.kind\n';

function lines(from: number, count: number): string {
  return Array.from({ length: count }, (_, index) => `lamp-${from + index},40,resistive\n`).join('');
}

async function listening(): Promise<TestApp & { readonly port: number; readonly count: (table: string) => number }> {
  const test = await testApp();
  const port = await listenOnAnyPort(test.app);
  const count = (table: string) => test.record.prepare<[], number>(`SELECT count(*) FROM ${table}`).pluck().get() ?? -1;
  return { ...test, port, count };
}

describe('a list on its way', () => {
  it.each(['skip', 'stop'])(
    'changes nothing before it is whole, and nothing at all where the client goes away, with onError=%s',
    async (onError) => {
      const { port, count } = await listening();
      const upload = openUpload(port, `/v1/imports/lamps?onError=${onError}`);
      await upload.send(HEADER + lines(0, 1000));
      await expect.poll(() => count('import_rows'), PATIENCE).toBeGreaterThan(500);
      expect(count('entries')).toBe(0);
      upload.goAway();
      await expect.poll(() => count('imports'), PATIENCE).toBe(0);
      expect([count('entries'), count('import_rows')]).toEqual([0, 0]);
    },
  );

  it.each([
    ['a wrong header', 'text/csv', `id,wattage\n${lines(0, 10)}`, 400, /"path":"wattage"/],
    ['a header without an end', 'text/csv', 'id,'.repeat(50_000), 413, /list-too-large/],
    ['a quote inside a cell', 'text/csv', `${HEADER}ha"ll,40,resistive\n`, 400, /unreadable-list/],
    ['a line without an end', 'application/x-ndjson', '['.repeat(140_000), 413, /list-too-large/],
    ['no bracket at its beginning', 'application/json', '{}', 400, /unreadable-list/],
  ])('with %s is answered while the client is still sending', async (_, type, piece, status, says) => {
    const { port, count } = await listening();
    const upload = openUpload(port, '/v1/imports/lamps', type);
    await upload.send(piece);
    expect((await upload.answer).statusCode).toBe(status);
    // Far more than the buffers on the way hold: it is sent only if somebody takes it.
    await upload.send(lines(10, 400_000));
    upload.end();
    await upload.taken;
    expect((await upload.answered()).body).toMatch(says);
    expect(count('entries')).toBe(0);
  });

  it('with onError=stop is answered at its first wrong row, while the client is still sending', async () => {
    const { port, count } = await listening();
    const upload = openUpload(port, '/v1/imports/lamps?onError=stop');
    await upload.send(`${HEADER}${lines(0, 10)}hall,much,resistive\n${lines(10, 10)}`);
    const message = await upload.answer;
    expect(message.statusCode).toBe(200);
    upload.end();
    const { body } = await upload.answered();
    expect(readReport(body).summary).toMatchObject({ kept: false, stoppedAtRow: 12 });
    expect(count('entries')).toBe(0);
  });

  it('shares the service with others: health checks are answered before it is done', async () => {
    const { port, count } = await listening();
    const upload = openUpload(port, '/v1/imports/lamps');
    await upload.send(HEADER + lines(0, 3000));
    upload.end();
    let checks = 0;
    while (count('entries') < 3000) {
      expect((await fetch(`http://127.0.0.1:${port}/health/live`)).status).toBe(200);
      checks += 1;
    }
    // Were the rows put in one go, one check at most would find them unfinished.
    expect(checks).toBeGreaterThan(5);
    expect(readReport((await upload.answered()).body).summary.created).toBe(3000);
  });

  it('is finished where the client goes away once it is taken in', async () => {
    const { port, count } = await listening();
    const upload = openUpload(port, '/v1/imports/lamps?onError=stop');
    await upload.send(HEADER + lines(0, 3000));
    upload.end();
    const message = await upload.answer;
    await once(message, 'readable');
    upload.goAway();
    await expect.poll(() => count('imports'), PATIENCE).toBe(0);
    expect([count('entries'), count('import_rows')]).toEqual([3000, 0]);
  });

  it('is not held back by a client that does not read its answer, nor are other lists', async () => {
    const { port, count } = await listening();
    const uploads = [0, 1].map(() => openUpload(port, '/v1/imports/lamps'));
    for (const [number, upload] of uploads.entries()) {
      await upload.send(HEADER + lines(number * 10_000, 2000));
      upload.end();
    }
    await expect.poll(() => count('entries'), PATIENCE).toBe(4000);
    const third = openUpload(port, '/v1/imports/lamps');
    await third.send(HEADER + lines(50_000, 1));
    third.end();
    expect(readReport((await third.answered()).body).summary.created).toBe(1);
    for (const upload of uploads) expect(readReport((await upload.answered()).body).summary.created).toBe(2000);
  });

  it('has to wait where two others are on their way', async () => {
    const { port, count } = await listening();
    const [first, second] = [openUpload(port, '/v1/imports/lamps'), openUpload(port, '/v1/imports/dimmers')];
    await first.send(HEADER + lines(0, 1));
    await second.send('id,latchingCurrent_mA,holdingCurrent_mA\n');
    await expect.poll(() => count('imports'), PATIENCE).toBe(2);

    const third = openUpload(port, '/v1/imports/lamps');
    await third.send(HEADER);
    const refused = await third.answer;
    expect([refused.statusCode, refused.headers['retry-after']]).toEqual([503, '5']);
    expect((await third.answered()).body).toMatch(/urn:holdfast:problem:imports-busy/);

    second.goAway();
    await expect.poll(() => count('imports'), PATIENCE).toBe(1);
    const fourth = openUpload(port, '/v1/imports/lamps');
    await fourth.send(HEADER + lines(1, 1));
    fourth.end();
    expect((await fourth.answered()).status).toBe(200);
    first.end();
    expect(readReport((await first.answered()).body).summary.created).toBe(1);
  });

  it('of the same lamps twice at once gives each lamp one revision', async () => {
    const { port, count } = await listening();
    const uploads = [0, 1].map(() => openUpload(port, '/v1/imports/lamps'));
    for (const upload of uploads) {
      await upload.send(HEADER + lines(0, 500));
      upload.end();
    }
    const reports = await Promise.all(uploads.map(async (upload) => readReport((await upload.answered()).body).summary));
    expect(reports.reduce((sum, { created }) => sum + created, 0)).toBe(500);
    expect(reports.reduce((sum, { unchanged }) => sum + unchanged, 0)).toBe(500);
    expect([count('entries'), count('revisions')]).toEqual([500, 500]);
  });
});
