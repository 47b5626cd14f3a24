import { Queue, Worker } from 'bullmq';
import { Redis } from 'ioredis';
import { describe, expect, it, onTestFinished } from 'vitest';
import { MODEL_VERSION } from '../../model/index.ts';
import { chunkId, queueName } from '../../server/queue/chunk-transport.ts';
import type { Answer, Chunk, JudgingQueue } from '../../server/queue/judging-queue.ts';
import { redisQueue } from '../../server/queue/redis-queue.ts';
import { chunkOf, expectedJudgements, judgementsOf } from '../support/queue-chunks.ts';
import { hasRedisServer, startRedisServer } from '../support/queue-redis-server.ts';
import { startWorkerProcess } from '../support/queue-worker-process.ts';

const PATIENCE = { timeout: 60_000 };

function queueAt(url: string): JudgingQueue {
  const queue = redisQueue(url);
  onTestFinished(() => queue.close());
  return queue;
}

/** What the test itself looks at and puts into Redis. */
function bareQueue(url: string): Queue<Chunk, string> {
  const connection = new Redis(url, { maxRetriesPerRequest: null });
  connection.on('error', () => undefined);
  const queue = new Queue<Chunk, string>(queueName(MODEL_VERSION), { connection });
  queue.on('error', () => undefined);
  onTestFinished(async () => {
    await queue.close();
    connection.disconnect();
  });
  return queue;
}

async function judged(queue: JudgingQueue, chunk: Chunk): Promise<readonly Answer[]> {
  const answers: Answer[] = [];
  // As a screening does: what is left open is asked again, whatever the reason.
  for (let open = chunk; open.questions.length > 0; ) {
    await queue.judge(open, (more) => void answers.push(...more));
    const known = new Set(answers.map(({ position }) => position));
    open = { ...open, questions: open.questions.filter(({ position }) => !known.has(position)) };
  }
  return answers;
}

describe.runIf(hasRedisServer)('worker processes over Redis', () => {
  it('lose nothing when one is killed in the middle of a chunk', async () => {
    const { url } = await startRedisServer();
    const bare = bareQueue(url);
    const first = startWorkerProcess(url);
    await first.ready();
    const chunk = chunkOf(60);
    const answers = judged(queueAt(url), chunk);
    await expect.poll(() => bare.getActiveCount(), PATIENCE).toBe(1);
    await first.kill();
    expect(await bare.getActiveCount()).toBe(1);
    startWorkerProcess(url);
    expect(judgementsOf(await answers)).toEqual(expectedJudgements(chunk));
  });

  it('hand in what they have judged when they are told to stop, and another does the rest', async () => {
    const { url } = await startRedisServer();
    const bare = bareQueue(url);
    const first = startWorkerProcess(url);
    await first.ready();
    const chunk = chunkOf(150);
    const answers = judged(queueAt(url), chunk);
    await expect.poll(() => bare.getActiveCount(), PATIENCE).toBe(1);
    expect(await first.terminate()).toBe(0);
    const [, answered] = /"answered":(\d+)/.exec(first.output()) ?? [];
    expect(Number(answered)).toBeLessThan(150);
    startWorkerProcess(url);
    expect(judgementsOf(await answers)).toEqual(expectedJudgements(chunk));
  });

  it.each(['SIGTERM', 'SIGKILL'] as const)('lose nothing when Redis ends by %s and comes back with its append-only file', async (how) => {
    const redis = await startRedisServer();
    const worker = startWorkerProcess(redis.url);
    await worker.ready();
    const chunks = [chunkOf(30, 's', 0), chunkOf(30, 's', 30), chunkOf(30, 's', 60)];
    const queue = queueAt(redis.url);
    const answers = chunks.map((chunk) => judged(queue, chunk));
    await expect.poll(() => worker.output(), PATIENCE).toContain('chunk judged');
    await redis.restart(how);
    for (const [index, chunk] of chunks.entries()) expect(judgementsOf((await answers[index]) ?? [])).toEqual(expectedJudgements(chunk));
  });

  it('are asked again for what Redis has lost altogether', async () => {
    const redis = await startRedisServer();
    const bare = bareQueue(redis.url);
    const chunk = chunkOf(3);
    const answers = judged(queueAt(redis.url), chunk);
    await expect.poll(() => bare.getWaitingCount(), PATIENCE).toBe(1);
    await bare.obliterate({ force: true });
    startWorkerProcess(redis.url);
    expect(judgementsOf(await answers)).toEqual(expectedJudgements(chunk));
  });

  it('judge on while nobody fetches, and whoever asks the same after a restart gets those answers', async () => {
    const { url } = await startRedisServer();
    const bare = bareQueue(url);
    const chunk = chunkOf(3);
    const before = redisQueue(url);
    const end = before.judge(chunk, () => undefined);
    await expect.poll(() => bare.getWaitingCount(), PATIENCE).toBe(1);
    await before.close();
    expect(await end).toEqual({ kind: 'stopped' });
    const worker = startWorkerProcess(url);
    await expect.poll(() => bare.getCompletedCount(), PATIENCE).toBe(1);
    await worker.kill();
    const answers: Answer[] = [];
    expect(await queueAt(url).judge(chunk, (more) => void answers.push(...more))).toEqual({ kind: 'done' });
    expect(judgementsOf(answers)).toEqual(expectedJudgements(chunk));
    // Fetched, they are gone from Redis.
    expect(await bare.getCompletedCount()).toBe(0);
  });

  it('refuse what another model version asked, and what other code completed otherwise, and leave it to others', async () => {
    const { url } = await startRedisServer();
    const bare = bareQueue(url);
    const worker = startWorkerProcess(url);
    const foreign = { ...chunkOf(2), modelVersion: 'another' };
    const [question] = chunkOf(1).questions;
    if (question === undefined) throw new Error('A chunk of one has a question.');
    const otherwise = { ...chunkOf(1), questions: [{ ...question, fingerprint: '0'.repeat(64) }] };
    for (const [index, chunk] of [foreign, otherwise].entries()) await bare.add('judge', chunk, { jobId: `foreign-${index}` });
    await expect.poll(() => bare.getDelayedCount(), PATIENCE).toBe(2);
    expect(worker.output()).toMatch(/the pairing is for model version another, this is/);
    expect(worker.output()).toMatch(/this code completes the pairing otherwise/);
    expect([await bare.getCompletedCount(), await bare.getFailedCount()]).toEqual([0, 0]);
    // Its own work is not held up by it.
    const chunk = chunkOf(2, 'own', 10);
    expect(judgementsOf(await judged(queueAt(url), chunk))).toEqual(expectedJudgements(chunk));
  });

  it('take a chunk apart that is lost, so that only the pairing to blame is given up', async () => {
    const { url } = await startRedisServer();
    const chunk = chunkOf(3);
    const blamed = chunk.questions[1]?.fingerprint;
    // In place of a process: a worker whose chunks fail as those of one do that dies over them.
    const connection = new Redis(url, { maxRetriesPerRequest: null });
    const asked: number[] = [];
    const { packAnswers } = await import('../../server/queue/chunk-transport.ts');
    const worker = new Worker<Chunk, string>(
      queueName(MODEL_VERSION),
      async ({ data }) => {
        asked.push(data.questions.length);
        if (data.questions.some(({ fingerprint }) => fingerprint === blamed)) throw new Error('job stalled more than allowable limit');
        const judgements = expectedJudgements(data);
        return packAnswers(
          data.questions.flatMap(({ position, fingerprint }) => {
            const judgement = judgements.get(position);
            return judgement === undefined ? [] : [{ position, fingerprint, ok: true as const, judgement, took_ms: 1 }];
          }),
        );
      },
      { connection },
    );
    onTestFinished(async () => {
      await worker.close();
      connection.disconnect();
    });
    const answers = await judged(queueAt(url), chunk);
    expect(asked).toEqual([3, 1, 1, 1]);
    expect(judgementsOf(answers).size).toBe(2);
    expect(answers.filter(({ ok }) => !ok)).toEqual([
      {
        position: 1,
        fingerprint: blamed,
        ok: false,
        failure: { kind: 'worker-lost', detail: 'job stalled more than allowable limit', attempts: 2 },
      },
    ]);
  });

  it('are missed, and that is said, where none is connected', async () => {
    const { url } = await startRedisServer();
    const queue = queueAt(url);
    await expect.poll(() => queue.waitingFor(), PATIENCE).toBe(`No worker of model version ${MODEL_VERSION} is connected.`);
    await startWorkerProcess(url, { HOLDFAST_WORKERS: '2' }).ready();
    await expect.poll(() => queue.waitingFor(), PATIENCE).toBeUndefined();
    await expect.poll(() => queue.breadth(), PATIENCE).toBe(2);
  });
});

describe('a queue whose Redis is away', () => {
  it('says so instead of waiting', async () => {
    const queue = queueAt('redis://127.0.0.1:1');
    const end = await queue.judge(chunkOf(1), () => undefined);
    expect(end).toEqual({ kind: 'unreachable', detail: expect.stringMatching(/^Redis cannot be reached/) });
    expect([await queue.breadth(), await queue.waitingFor()]).toEqual([undefined, undefined]);
  });
});

describe('the id of a chunk', () => {
  it('is made of its questions: the same again has the same one, any other has not', () => {
    const chunk = chunkOf(3);
    expect(chunkId(chunkOf(3), 1)).toBe(chunkId(chunk, 1));
    const others = [chunkId(chunk, 2), chunkId(chunkOf(2), 1), chunkId({ ...chunk, screening: 'other' }, 1)];
    expect(new Set([chunkId(chunk, 1), ...others]).size).toBe(4);
    // What the queue takes as an id: no colon, and no number alone.
    expect(chunkId(chunk, 1)).toMatch(/^[\w-]+$/);
  });
});
