/**
 * Takes chunks from Redis and judges them in this process's threads. It holds no state: what it has not answered when it ends is given
 * to another. The main thread only waits, so that the lock on a chunk is renewed in time.
 */
import { DelayedError, type Job, Worker } from 'bullmq';
import { Redis } from 'ioredis';
import { MODEL_VERSION } from '../../model/index.ts';
import type { BackgroundSimulation } from '../simulation/simulation.ts';
import { threadLanes } from '../simulation/thread-lanes.ts';
import { packAnswers, queueName } from './chunk-transport.ts';
import type { Answer, Chunk } from './judging-queue.ts';
import { judgeQuestion } from './question-judging.ts';
import { workerName } from './worker-name.ts';

export interface RedisWorker {
  /** Begins no pairing any more, hands in what is answered, and lets go. */
  close(): Promise<void>;
}

export interface RedisWorkerParts {
  readonly url: string;
  readonly simulation: BackgroundSimulation;
  readonly threads: number;
  /** s without a sign of life after which a worker's chunks are given to another */
  readonly lock_s: number;
  readonly logger: { info(particulars: object, message: string): void; warn(particulars: object, message: string): void };
}

/** so that the threads have the next chunk's pairings when one chunk runs out */
const CHUNKS_ABREAST = 2;
/** how often a chunk may lose its worker before it is taken apart; workers are also stopped for no fault of a chunk */
const MOST_LOSSES = 3;
/** ms that a refused chunk waits before anyone is offered it again */
const REFUSED_FOR = 15_000;

export function startRedisWorker({ url, simulation, threads, lock_s, logger }: RedisWorkerParts): RedisWorker {
  const connection = new Redis(url, { maxRetriesPerRequest: null, retryStrategy: (times) => Math.min(1000, 100 * times) });
  const gate = threadLanes(threads + 1);
  let closing = false;

  const judgeChunk = async (job: Job<Chunk, string>, token: string | undefined): Promise<string> => {
    const chunk = job.data;
    const answers: Answer[] = [];
    let refused: string | undefined;
    const judgeOne = async (index: number): Promise<void> => {
      const question = chunk.questions[index];
      if (question === undefined || !(await gate.enter('background'))) return;
      try {
        if (closing || refused !== undefined) return;
        const outcome = await judgeQuestion(simulation, chunk, question);
        if (outcome.kind === 'answered') answers.push(outcome.answer);
        if (outcome.kind === 'refused') refused = outcome.detail;
      } finally {
        gate.leave();
      }
    };
    await Promise.all(chunk.questions.map((_, index) => judgeOne(index)));
    if (refused !== undefined) {
      logger.warn({ chunk: job.id, detail: refused }, 'chunk refused');
      await job.moveToDelayed(Date.now() + REFUSED_FOR, token);
      throw new DelayedError(refused);
    }
    logger.info({ chunk: job.id, asked: chunk.questions.length, answered: answers.length }, 'chunk judged');
    return packAnswers(answers);
  };

  const worker = new Worker<Chunk, string>(queueName(MODEL_VERSION), judgeChunk, {
    connection,
    name: workerName(threads),
    concurrency: CHUNKS_ABREAST,
    lockDuration: lock_s * 1000,
    stalledInterval: lock_s * 1000,
    maxStalledCount: MOST_LOSSES,
  });
  const troubled = (error: Error): void => logger.warn({ detail: error.message }, 'trouble with Redis');
  worker.on('error', troubled);
  connection.on('error', troubled);

  return {
    close: async () => {
      closing = true;
      await worker.close();
      connection.disconnect();
    },
  };
}
