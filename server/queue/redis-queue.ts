/**
 * Has chunks judged by worker processes over Redis (BullMQ). It adds a chunk under an id made of its questions, looks for its end, and
 * takes the answers out; asked again after a restart, it finds what is there. What Redis loses is added again.
 */
import { type Job, Queue } from 'bullmq';
import { Redis } from 'ioredis';
import { MODEL_VERSION } from '../../model/index.ts';
import { chunkId, queueName, unpackAnswers } from './chunk-transport.ts';
import type { Answer, Chunk, ChunkEnd, JudgingQueue } from './judging-queue.ts';
import { readBreadth } from './worker-name.ts';

type Deliver = (answers: readonly Answer[]) => void;
type JobEnd =
  | { readonly kind: 'answered'; readonly answers: readonly Answer[] }
  | { readonly kind: 'lost'; readonly detail: string }
  | Exclude<ChunkEnd, { kind: 'done' }>;

interface Pending {
  readonly chunk: Chunk;
  readonly settle: (end: JobEnd) => void;
}

/** enough that some fifty workers never wait for the next; in Redis, a waiting chunk takes some 100 kB */
const CHUNKS_AT_ONCE = 128;
/** ms between looks for ended chunks */
const LOOK = 200;
/** looks between checks that Redis still holds what is pending */
const LOOKS_PER_CHECK = 50;
/** ms to wait for Redis before it counts as away */
const FIRST_CONTACT = 1_000;
/** looks in vain, with Redis away, before whoever asked is told */
const PATIENCE = 3;
/** seconds that Redis keeps answers nobody fetched, as of a screening that was cancelled */
const KEEP = 7 * 24 * 3600;
/** A pairing is asked alone once the chunk it was in was lost. */
const ATTEMPTS = 2;

export function redisQueue(url: string): JudgingQueue {
  const connection = new Redis(url, {
    // Fails at once where Redis is away, so that the screening can say so instead of hanging.
    enableOfflineQueue: false,
    maxRetriesPerRequest: 1,
    retryStrategy: (times) => Math.min(1000, 100 * times),
  });
  // Each command says for itself that it failed.
  connection.on('error', () => undefined);
  let made: Queue<Chunk, string> | undefined;
  /** The queue, which is made once Redis answers: one made before keeps failing afterwards. */
  const reach = async (): Promise<Queue<Chunk, string>> => {
    if (connection.status !== 'ready') await readyWithin(connection, FIRST_CONTACT);
    if (made === undefined) {
      made = new Queue<Chunk, string>(queueName(MODEL_VERSION), { connection });
      made.on('error', () => undefined);
    }
    await made.waitUntilReady();
    return made;
  };

  const pending = new Map<string, Pending>();
  let timer: NodeJS.Timeout | undefined;
  let looks = 0;
  let misses = 0;
  let closed = false;

  const add = async (id: string, chunk: Chunk): Promise<Job<Chunk, string>> =>
    (await reach()).add('judge', chunk, { jobId: id, removeOnComplete: { age: KEEP }, removeOnFail: { age: KEEP } });

  const settle = (id: string, end: JobEnd): void => {
    pending.get(id)?.settle(end);
    pending.delete(id);
  };

  const take = async (queue: Queue<Chunk, string>, id: string): Promise<void> => {
    const job = await queue.getJob(id);
    if (job === undefined) return;
    const { failedReason, returnvalue } = job;
    if (returnvalue === null) settle(id, { kind: 'lost', detail: failedReason ?? 'no reason was given' });
    else settle(id, { kind: 'answered', answers: unpackAnswers(returnvalue) });
    await job.remove();
  };

  /** Takes the ends of pending chunks out of Redis: the newest at every look, and now and then whatever was overlooked or lost. */
  const look = async (): Promise<void> => {
    const queue = await reach();
    for (const id of await queue.getRanges(['completed', 'failed'], 0, pending.size * 4)) if (pending.has(id)) await take(queue, id);
    looks += 1;
    if (looks % LOOKS_PER_CHECK !== 0) return;
    for (const [id, { chunk }] of [...pending]) {
      const state = await queue.getJobState(id);
      if (state === 'unknown') await add(id, chunk);
      if (state === 'completed' || state === 'failed') await take(queue, id);
    }
  };

  const goOnLooking = (): void => {
    if (timer !== undefined || closed) return;
    timer = setTimeout(async () => {
      try {
        await look();
        misses = 0;
      } catch (error) {
        misses += 1;
        if (misses >= PATIENCE) for (const id of [...pending.keys()]) settle(id, unreachable(error));
      }
      timer = undefined;
      if (pending.size > 0) goOnLooking();
    }, LOOK);
  };

  const send = async (chunk: Chunk, attempt: number): Promise<JobEnd> => {
    if (closed) return { kind: 'stopped' };
    const id = chunkId(chunk, attempt);
    try {
      await add(id, chunk);
    } catch (error) {
      return closed ? { kind: 'stopped' } : unreachable(error);
    }
    return new Promise((resolve) => {
      pending.set(id, { chunk, settle: resolve });
      goOnLooking();
    });
  };

  const judge = async (chunk: Chunk, deliver: Deliver, attempt: number): Promise<ChunkEnd> => {
    const end = await send(chunk, attempt);
    if (end.kind === 'answered') {
      deliver(end.answers);
      return { kind: 'done' };
    }
    if (end.kind !== 'lost') return end;
    if (attempt < ATTEMPTS) {
      // One of its pairings may have ended the worker: alone, each answers for itself.
      const alone = chunk.questions.map((question) => judge({ ...chunk, questions: [question] }, deliver, attempt + 1));
      return worstOf(await Promise.all(alone));
    }
    const failure = { kind: 'worker-lost', detail: end.detail, attempts: ATTEMPTS } as const;
    deliver(chunk.questions.map(({ position, fingerprint }) => ({ position, fingerprint, ok: false, failure })));
    return { kind: 'done' };
  };

  return {
    chunksAtOnce: CHUNKS_AT_ONCE,
    judge: (chunk, deliver) => judge(chunk, deliver, 1),
    forget: async (screening) => {
      for (const [id, { chunk }] of [...pending]) {
        if (chunk.screening !== screening) continue;
        settle(id, { kind: 'stopped' });
        // One that is being judged cannot be taken back; its answers are dropped in time.
        await reach()
          .then((queue) => queue.remove(id))
          .catch(() => undefined);
      }
    },
    breadth: () =>
      reach()
        .then(readBreadth)
        .catch(() => undefined),
    waitingFor: async () => {
      const workers = await reach()
        .then((queue) => queue.getWorkersCount())
        .catch(() => undefined);
      return workers === 0 ? `No worker of model version ${MODEL_VERSION} is connected.` : undefined;
    },
    close: async () => {
      closed = true;
      clearTimeout(timer);
      for (const id of [...pending.keys()]) settle(id, { kind: 'stopped' });
      await made?.close().catch(() => undefined);
      connection.disconnect();
    },
  };
}

function readyWithin(connection: Redis, ms: number): Promise<void> {
  return new Promise((resolve, reject) => {
    const timer = setTimeout(() => {
      connection.off('ready', ready);
      reject(new Error('it does not answer'));
    }, ms);
    const ready = (): void => {
      clearTimeout(timer);
      resolve();
    };
    connection.once('ready', ready);
  });
}

function unreachable(error: unknown): JobEnd & ChunkEnd {
  const reason = error instanceof Error ? error.message : String(error);
  return { kind: 'unreachable', detail: `Redis cannot be reached (${reason}).` };
}

function worstOf(ends: readonly ChunkEnd[]): ChunkEnd {
  return ends.find(({ kind }) => kind === 'stopped') ?? ends.find(({ kind }) => kind === 'unreachable') ?? { kind: 'done' };
}
