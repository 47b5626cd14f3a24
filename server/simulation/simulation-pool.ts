/**
 * Simulates in worker threads, so that the main thread goes on answering. The queue is bounded: what does not fit is refused with the
 * time after which it may.
 */
import { Piscina } from 'piscina';
import type { Simulated, Simulation, SimulationTask } from './simulation.ts';

export interface SimulationPool extends Simulation {
  load(): { readonly threads: number; readonly waiting: number; readonly completed: number };
  /** Lets what runs and waits finish. */
  close(): Promise<void>;
  /** Ends the threads where they are; what was asked of them fails. */
  destroy(): Promise<void>;
}

export interface PoolSize {
  readonly threads: number;
  /** tasks that may wait beyond those that run */
  readonly queueLimit: number;
}

// Compiled, the entry is a .js beside this file; from source it is TypeScript, which a thread reads only through tsx.
const isSource = import.meta.url.endsWith('.ts');
const ENTRY = new URL(isSource ? './simulation-thread.ts' : './simulation-thread.js', import.meta.url).href;

/** seconds; the longest and the shortest wait a client is told */
const RETRY_AT_LEAST = 1;
const RETRY_AT_MOST = 60;

export function startSimulationPool({ threads, queueLimit }: PoolSize): SimulationPool {
  const pool = new Piscina({
    filename: ENTRY,
    execArgv: isSource ? ['--import', 'tsx'] : [],
    minThreads: threads,
    maxThreads: threads,
    maxQueue: queueLimit,
    concurrentTasksPerWorker: 1,
    // The deadline of stopping is the caller's, who destroys the pool when it is over.
    closeTimeout: 2 ** 31 - 1,
  });

  // A full queue rejects with a plain text error, so it is looked at first; nothing can slip in between the look and the call.
  const run = async <T>(task: SimulationTask): Promise<Simulated<T>> => {
    if (pool.queueSize >= queueLimit) return { ok: false, failure: { kind: 'queue-full', retryAfter_s: retryAfter() } };
    return (await pool.run(task)) as Simulated<T>;
  };

  /** When about half of the queue will be done, going by the mean of what has run; before anything has, a second each. */
  const retryAfter = (): number => {
    const mean_s = pool.completed === 0 ? 1 : pool.histogram.runTime.mean / 1000;
    const half_s = (mean_s * pool.queueSize) / (2 * threads);
    return Math.min(RETRY_AT_MOST, Math.max(RETRY_AT_LEAST, Math.ceil(half_s)));
  };

  return {
    judge: (pairing, options) => run({ kind: 'judge', pairing, options }),
    recordWaveforms: (pairing, dialPositions, place) => run({ kind: 'waveforms', pairing, dialPositions, place }),
    load: () => ({ threads: pool.threads.length, waiting: pool.queueSize, completed: pool.completed }),
    close: () => pool.close(),
    destroy: () => pool.destroy(),
  };
}
