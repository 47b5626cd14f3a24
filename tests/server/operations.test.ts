import { connect } from 'node:net';
import { describe, expect, it } from 'vitest';
import type { App } from '../../server/app.ts';
import { PROBLEMS, problemDocument } from '../../server/problems.ts';
import { listenOnAnyPort, testApp } from '../support/server-app.ts';
import { fakeSimulation } from '../support/server-fake-simulation.ts';
import { examplePairing } from '../support/server-pairings.ts';

describe('health', () => {
  it('is ready while the record can be read, and not otherwise', async () => {
    let readable = true;
    const { get } = await testApp({ isRecordReadable: () => readable });
    expect((await get('/health/ready')).json()).toEqual({ status: 'ready' });
    readable = false;
    const answer = await get('/health/ready');
    expect([answer.statusCode, answer.json().type]).toEqual([503, 'urn:holdfast:problem:not-ready']);
    expect((await get('/health/live')).statusCode).toBe(200);
  });
});

describe('a full disk', () => {
  it('is told to whoever asks for something to be kept, and what is in the record is answered all the same', async () => {
    const { app, record, get, verdicts, post } = await testApp({ simulation: fakeSimulation() });
    const { id } = (await post(examplePairing())).json();
    record.pragma(`max_page_count = ${record.pragma('page_count', { simple: true })}`);
    // more than the free space that any page may still have
    const name = (number: number) => `${number} `.repeat(50).slice(0, 190).trim();
    let answer = await putLamp(app, 'lamp-0', name(0));
    for (let number = 1; answer.statusCode === 201 && number < 1000; number += 1)
      answer = await putLamp(app, `lamp-${number}`, name(number));
    expect([answer.statusCode, answer.headers['retry-after'], answer.json()]).toEqual([
      503,
      '60',
      expect.objectContaining({
        type: 'urn:holdfast:problem:record-unavailable',
        detail: 'The disk that holds the record is full. Nothing of the request is kept.',
      }),
    ]);
    expect((await get(`/v1/verdicts/${id}`)).statusCode).toBe(200);
    expect(verdicts.count()).toBe(1);
  });
});

function putLamp(app: App, id: string, name: string) {
  const payload = { name, lamp: { ratedPower_W: 8, load: { kind: 'resistive' } } };
  return app.inject({ method: 'PUT', url: `/v1/lamps/${id}`, payload });
}

describe('request ids', () => {
  it('are taken from the caller where they are harmless, and appear in answer, problem and log', async () => {
    const { get, logged } = await testApp();
    const answer = await get('/nowhere', { 'x-request-id': 'front-desk.7' });
    expect(answer.headers['x-request-id']).toBe('front-desk.7');
    expect(answer.json().requestId).toBe('front-desk.7');
    expect(logged.some((line) => JSON.parse(line).reqId === 'front-desk.7')).toBe(true);
  });

  it.each(['with space', '"quoted"', 'x'.repeat(65)])('are made anew in place of %s', async (sent) => {
    const { get } = await testApp();
    expect((await get('/nowhere', { 'x-request-id': sent })).headers['x-request-id']).toMatch(/^[0-9a-f-]{36}$/);
  });
});

describe('the reference page', () => {
  it('may run its own scripts, and no other answer may run any', async () => {
    const { get } = await testApp();
    const page = await get('/docs');
    expect(page.statusCode).toBe(200);
    expect(page.headers['content-security-policy']).toMatch(/script-src 'self';/);
    for (const url of ['/openapi.json', '/health/live', '/v1/verdicts', '/nowhere']) {
      expect((await get(url)).headers['content-security-policy']).toBe("default-src 'none';frame-ancestors 'none'");
    }
  });

  it('needs nothing from another host', async () => {
    const { get } = await testApp();
    expect((await get('/docs')).body).not.toMatch(/(src|href)="(https?:)?\/\//);
  });
});

describe('a problem document', () => {
  it('has the status and the title of the table', () => {
    for (const [code, { status, title }] of Object.entries(PROBLEMS)) {
      const document = problemDocument(code as keyof typeof PROBLEMS, 'Some detail.', 'r1');
      expect(document).toEqual({ type: `urn:holdfast:problem:${code}`, title, status, detail: 'Some detail.', requestId: 'r1' });
    }
  });

  it('answers bytes that are not HTTP', async () => {
    const { app } = await testApp();
    const port = await listenOnAnyPort(app);
    const text = await new Promise<string>((resolve, reject) => {
      let received = '';
      const socket = connect(port, '127.0.0.1', () => socket.write('how do you do\r\n\r\n'));
      socket.on('data', (bytes) => {
        received += bytes.toString();
      });
      socket.on('end', () => resolve(received));
      socket.on('error', reject);
    });
    expect(text).toMatch(/^HTTP\/1\.1 400 /);
    expect(JSON.parse(text.split('\r\n\r\n')[1] ?? '')).toMatchObject({ type: 'urn:holdfast:problem:malformed-http', status: 400 });
  });
});
