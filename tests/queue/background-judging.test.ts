import { existsSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it, onTestFinished } from 'vitest';
import { askedPairing } from '../../server/schemas/pairing.ts';
import { judgeAsked } from '../../server/simulation/asked-judging.ts';
import { startSimulationPool } from '../../server/simulation/simulation-pool.ts';
import { completePairing } from '../../server/verdicts/pairing-completion.ts';
import { toModel } from '../../server/verdicts/pairing-to-model.ts';
import { LOSSES } from '../support/server-losing-thread.ts';
import { briefPairing } from '../support/server-pairings.ts';
import { temporaryFolder } from '../support/server-temporary-record.ts';

const ENTRY = new URL('../support/server-losing-thread.ts', import.meta.url);

function losingPool(backgroundDeadline_s = 60) {
  process.env.LOSING_THREAD_TRACE = join(temporaryFolder(), 'died');
  const pool = startSimulationPool({ threads: 1, queueLimit: 8, backgroundDeadline_s, entry: ENTRY });
  onTestFinished(() => pool.destroy());
  return pool;
}

function at(frequency_Hz: number) {
  const completion = completePairing(askedPairing.parse({ ...briefPairing(), mains: { voltage_V: 230, frequency_Hz } }));
  return toModel(completion);
}

describe('a background judgement', () => {
  it('gives what the model gives, and how long it took', async () => {
    const { pairing, options } = at(50);
    const judged = await losingPool().judgeInBackground(pairing, options);
    expect(judged).toEqual({ ...judgeAsked(pairing, options), took_ms: expect.any(Number) });
  });

  it('is repeated once in a fresh thread where its thread died', async () => {
    const { pairing, options } = at(LOSSES.diesOnce);
    expect(await losingPool().judgeInBackground(pairing, options)).toMatchObject({ ok: true });
  });

  it.each([
    ['dies over it', LOSSES.diesAlways, 60, /exited with code: 7/],
    ['meets a bug of the model', LOSSES.throwsAlways, 60, /A bug, for a test/],
    ['hangs over it', LOSSES.hangsAlways, 0.5, /no answer within 0\.5 s/],
  ])('is given up where its thread %s twice, and the pool goes on', async (_, frequency, deadline_s, told) => {
    const pool = losingPool(deadline_s);
    const lost = at(frequency);
    expect(await pool.judgeInBackground(lost.pairing, lost.options)).toEqual({
      ok: false,
      failure: { kind: 'thread-lost', detail: expect.stringMatching(told), attempts: 2 },
    });
    const { pairing, options } = at(50);
    expect(await pool.judge(pairing, options)).toMatchObject({ ok: true });
  });

  it('waits while no thread can be started, and is judged once one can', async () => {
    const pool = losingPool();
    const { pairing, options } = at(50);
    expect(await pool.judgeInBackground(pairing, options)).toMatchObject({ ok: true });
    const trace = process.env.LOSING_THREAD_TRACE ?? '';
    writeFileSync(`${trace}-no-start`, '');
    const lost = at(LOSSES.diesOnce);
    let ended = false;
    const judged = pool.judgeInBackground(lost.pairing, lost.options).finally(() => {
      ended = true;
    });
    await expect.poll(() => existsSync(`${trace}-tried`), { timeout: 60_000 }).toBe(true);
    expect(ended).toBe(false);
    rmSync(`${trace}-no-start`);
    expect(await judged).toMatchObject({ ok: true });
  });

  it('waits behind every interactive question, also those that were asked after it', async () => {
    const pool = losingPool();
    const { pairing, options } = at(50);
    const order: string[] = [];
    const note = (name: string) => () => void order.push(name);
    const asked = [
      pool.judgeInBackground(pairing, options).then(note('background 1')),
      pool.judgeInBackground(pairing, options).then(note('background 2')),
      pool.judge(pairing, options).then(note('interactive 1')),
      pool.judge(pairing, options).then(note('interactive 2')),
    ];
    await Promise.all(asked);
    expect(order).toEqual(['background 1', 'interactive 1', 'interactive 2', 'background 2']);
  });

  it('is told as stopped, not as failed, where the threads are ended', async () => {
    const pool = losingPool();
    const { pairing, options } = at(50);
    const asked = Array.from({ length: 4 }, () => pool.judgeInBackground(pairing, options));
    await pool.destroy();
    for (const judged of await Promise.all(asked)) expect(judged).toEqual({ ok: false, failure: { kind: 'stopping' } });
  });
});
