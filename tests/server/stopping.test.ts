import { connect } from 'node:net';
import { describe, expect, it } from 'vitest';
import { runStopStages } from '../../server/shutdown.ts';
import type { AskedJudgement } from '../../server/simulation/asked-circuit.ts';
import type { Simulated } from '../../server/simulation/simulation.ts';
import { listenOnAnyPort, testApp } from '../support/server-app.ts';
import { CANNED_JUDGEMENT, fakeSimulation, pending } from '../support/server-fake-simulation.ts';
import { examplePairing } from '../support/server-pairings.ts';

/** A busy machine may take long to do what is waited for; nothing here is measured in time. */
const PATIENCE = { timeout: 60_000 };

const never = () => new Promise<void>(() => undefined);

describe('the stop sequence', () => {
  function log() {
    const entries: [string, string][] = [];
    const note = (particulars: object, message: string) => void entries.push([(particulars as { stage: string }).stage, message]);
    return { entries, info: note, error: note };
  }

  it('runs its stages one after the other', async () => {
    const order: string[] = [];
    const stage = (name: string) => ({
      name,
      deadline_ms: 1000,
      act: async () => {
        await new Promise(setImmediate);
        order.push(name);
      },
    });
    expect(await runStopStages([stage('a'), stage('b'), stage('c')], log())).toBe(true);
    expect(order).toEqual(['a', 'b', 'c']);
  });

  it('goes on past a stage that overruns or fails, does what stands in for it, and says so', async () => {
    const done: string[] = [];
    const noted = log();
    const clean = await runStopStages(
      [
        { name: 'hangs', deadline_ms: 1, act: never, orElse: () => void done.push('instead') },
        { name: 'fails', deadline_ms: 1000, act: () => Promise.reject(new Error('no')) },
        { name: 'works', deadline_ms: 1000, act: () => void done.push('works') },
      ],
      noted,
    );
    expect(clean).toBe(false);
    expect(done).toEqual(['instead', 'works']);
    expect(noted.entries).toEqual([
      ['hangs', 'stop stage overran its deadline'],
      ['fails', 'stop stage failed'],
      ['works', 'stop stage done'],
    ]);
  });
});

describe('closing the application', () => {
  async function listening(simulate: () => Promise<Simulated<AskedJudgement>>) {
    const simulation = fakeSimulation(simulate);
    const { app } = await testApp({ simulation });
    return { app, port: await listenOnAnyPort(app), asked: simulation.asked };
  }

  it('lets a running request finish, closes its kept-alive connection with the answer, and then listens no more', async () => {
    const { promise, resolve } = pending<Simulated<AskedJudgement>>();
    const { app, port, asked } = await listening(() => promise);
    const body = JSON.stringify(examplePairing());
    const running = converse(port, [
      `POST /v1/verdicts HTTP/1.1\r\nHost: x\r\nContent-Type: application/json\r\nContent-Length: ${body.length}\r\n\r\n${body}`,
    ]);
    await expect.poll(asked, PATIENCE).toBe(1);
    const closed = app.close();
    await expect.poll(() => app.isStopping, PATIENCE).toBe(true);
    resolve({ ok: true, value: CANNED_JUDGEMENT });
    expect(await running.ended).toMatch(/^HTTP\/1\.1 201 .*\r\nconnection: close\r\n/is);
    await closed;
    await expect(converse(port, []).ended).rejects.toThrow(/ECONNREFUSED/);
  });

  it('refuses a request that arrives on an open connection meanwhile, but says that it is live and not ready', async () => {
    const { app, port } = await listening(async () => ({ ok: true, value: CANNED_JUDGEMENT }));
    // Each connection has answered once and holds the head of a second request but for its last line, so it is not idle.
    const open = await Promise.all(
      ['/v1/verdicts', '/health/live', '/health/ready'].map(async (path) => {
        const talk = converse(port, [`GET /health/live HTTP/1.1\r\nHost: x\r\n\r\nGET ${path} HTTP/1.1\r\nHost: x\r\n`]);
        await expect.poll(talk.received, PATIENCE).toMatch(/"live"/);
        return talk;
      }),
    );
    const closed = app.close();
    await expect.poll(() => app.isStopping, PATIENCE).toBe(true);
    for (const talk of open) talk.say('\r\n');
    const [refused, live, ready] = (await Promise.all(open.map(({ ended }) => ended))).map((text) =>
      text.slice(text.indexOf('HTTP/1.1', 1)),
    );
    await closed;
    expect(refused).toMatch(/^HTTP\/1\.1 503 .*\r\nconnection: close\r\n.*\r\nretry-after: 1\r\n.*urn:holdfast:problem:stopping/is);
    expect(live).toMatch(/^HTTP\/1\.1 200 .*\r\nconnection: close\r\n/is);
    expect(ready).toMatch(/^HTTP\/1\.1 503 .*urn:holdfast:problem:not-ready/is);
  });
});

/** A plain connection: what it was told so far, and the whole of it once the other end has closed. */
function converse(port: number, first: readonly string[]) {
  let text = '';
  const socket = connect(port, '127.0.0.1', () => {
    for (const line of first) socket.write(line);
  });
  socket.on('data', (bytes) => {
    text += bytes.toString();
  });
  const ended = new Promise<string>((resolve, reject) => {
    socket.on('end', () => resolve(text));
    socket.on('error', reject);
  });
  return { ended, received: () => text, say: (line: string) => void socket.write(line) };
}
