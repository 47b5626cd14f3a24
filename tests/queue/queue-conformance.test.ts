import { describe, expect, it, onTestFinished } from 'vitest';
import { embeddedQueue } from '../../server/queue/embedded-queue.ts';
import type { Answer, JudgingQueue } from '../../server/queue/judging-queue.ts';
import { redisQueue } from '../../server/queue/redis-queue.ts';
import { startSimulationPool } from '../../server/simulation/simulation-pool.ts';
import { chunkOf, expectedJudgements, judgementsOf } from '../support/queue-chunks.ts';
import { hasRedisServer, startRedisServer } from '../support/queue-redis-server.ts';
import { startWorkerProcess } from '../support/queue-worker-process.ts';

async function embedded(): Promise<JudgingQueue> {
  const pool = startSimulationPool({ threads: 1, queueLimit: 8 });
  const queue = embeddedQueue(pool, 1);
  onTestFinished(async () => {
    await queue.close();
    await pool.destroy();
  });
  return queue;
}

async function overRedis(): Promise<JudgingQueue> {
  const { url } = await startRedisServer();
  await startWorkerProcess(url).ready();
  const queue = redisQueue(url);
  onTestFinished(() => queue.close());
  return queue;
}

const engines: [string, boolean, () => Promise<JudgingQueue>][] = [
  ['the embedded threads', true, embedded],
  [`worker processes over Redis${hasRedisServer ? '' : ' (redis-server is not installed)'}`, hasRedisServer, overRedis],
];

describe.each(engines)('a judging queue of %s', (_, isThere, start) => {
  it.runIf(isThere)('answers every question of its chunks with what the model says, all before the end', async () => {
    const queue = await start();
    const chunks = [chunkOf(5, 'a', 0), chunkOf(1, 'a', 5), chunkOf(3, 'b', 6)];
    await Promise.all(
      chunks.map(async (chunk) => {
        const answers: Answer[] = [];
        expect(await queue.judge(chunk, (more) => void answers.push(...more))).toEqual({ kind: 'done' });
        expect(judgementsOf(answers)).toEqual(expectedJudgements(chunk));
        expect(answers.every((answer) => answer.ok && answer.took_ms > 0)).toBe(true);
        expect(answers.map(({ fingerprint }) => fingerprint).sort()).toEqual(chunk.questions.map(({ fingerprint }) => fingerprint).sort());
      }),
    );
  });

  it.runIf(isThere)('can be asked the same again', async () => {
    const queue = await start();
    const chunk = chunkOf(2);
    for (let round = 0; round < 2; round += 1) {
      const answers: Answer[] = [];
      expect(await queue.judge(chunk, (more) => void answers.push(...more))).toEqual({ kind: 'done' });
      expect(answers).toHaveLength(2);
    }
  });

  it.runIf(isThere)('leaves what waits open when it is closed', async () => {
    const queue = await start();
    const chunk = chunkOf(400);
    const answers: Answer[] = [];
    const end = queue.judge(chunk, (more) => void answers.push(...more));
    await queue.close();
    expect(await end).toEqual({ kind: 'stopped' });
    expect(answers.length).toBeLessThan(400);
    expect(await queue.judge(chunkOf(1), () => undefined)).toEqual({ kind: 'stopped' });
  });

  it.runIf(isThere)('ends the chunks of a screening that is forgotten', async () => {
    const queue = await start();
    const forgotten = queue.judge(chunkOf(400, 'forgotten'), () => undefined);
    await queue.forget('forgotten');
    await forgotten;
    const answers: Answer[] = [];
    const kept = chunkOf(2, 'kept', 500);
    expect(await queue.judge(kept, (more) => void answers.push(...more))).toEqual({ kind: 'done' });
    expect(judgementsOf(answers)).toEqual(expectedJudgements(kept));
  });

  it.runIf(isThere)('knows how many pairings are judged at a time, and that nobody waits in vain', async () => {
    const queue = await start();
    await expect.poll(() => queue.breadth(), { timeout: 20_000 }).toBe(1);
    expect(await queue.waitingFor()).toBeUndefined();
  });
});
