/**
 * Simulates in worker threads, so that the main thread goes on answering. The interactive queue is bounded: what does not fit is refused
 * with the time after which it may. Background judgements get the threads that nobody else wants.
 */
import { Piscina } from 'piscina';
import { judgeDespiteLosses } from './background-judging.ts';
import type { BackgroundSimulation, Simulated, Simulation, SimulationTask } from './simulation.ts';
import { threadLanes } from './thread-lanes.ts';

export interface SimulationPool extends Simulation, BackgroundSimulation {
  load(): { readonly threads: number; readonly waiting: number; readonly completed: number };
  /** Lets what runs and waits finish. */
  close(): Promise<void>;
  /** Ends the threads where they are; what was asked of them fails. */
  destroy(): Promise<void>;
}

export interface PoolSize {
  readonly threads: number;
  /** interactive tasks that may wait beyond those that run */
  readonly queueLimit: number;
  /** s that a background judgement is given before its thread is ended */
  readonly backgroundDeadline_s?: number;
  /** a thread's entry in place of the simulation's, for tests that lose threads */
  readonly entry?: URL;
}

// Compiled, the entry is a .js beside this file; from source it is TypeScript, which a thread has to be taught to read.
const isSource = import.meta.url.endsWith('.ts');
const TEACH_TYPESCRIPT = ['--import', new URL('./typescript-threads.mjs', import.meta.url).href];
const ENTRY = new URL(isSource ? './simulation-thread.ts' : './simulation-thread.js', import.meta.url);

/** seconds; the longest and the shortest wait a client is told */
const RETRY_AT_LEAST = 1;
const RETRY_AT_MOST = 60;
/** s; the dearest pairings take some ten seconds, and the model's own budgets end every simulation: only a bug or a swamped machine overruns it */
export const BACKGROUND_DEADLINE_S = 600;
/** ms between looks for tasks that no thread is there for, and before another thread is tried for them */
const REVIVAL = 1_000;
/** MiB of heap: a simulation needs some ten; one that runs away loses its thread and not the process */
const THREAD_HEAP = 1024;

export function startSimulationPool({ threads, queueLimit, backgroundDeadline_s, entry = ENTRY }: PoolSize): SimulationPool {
  const pool = new Piscina({
    filename: entry.href,
    execArgv: isSource ? TEACH_TYPESCRIPT : [],
    minThreads: threads,
    maxThreads: threads,
    concurrentTasksPerWorker: 1,
    resourceLimits: { maxOldGenerationSizeMb: THREAD_HEAP },
    // The deadline of stopping is the caller's, who destroys the pool when it is over.
    closeTimeout: 2 ** 31 - 1,
  });
  // A thread that dies between tasks is replaced by the pool and owes nobody an answer; unheard, the event would end the process.
  pool.on('error', () => undefined);
  // The pool's own queue stays empty: a task is handed over when a thread is free for it.
  const lanes = threadLanes(threads);
  // After a thread that could not even be started, for want of memory or while the code was being replaced, the pool starts none until it
  // is asked for something more; what waits by then would wait for ever.
  const revival = setInterval(() => {
    if (pool.queueSize === 0 || pool.threads.length > 0) return;
    pool.run({ kind: 'nothing' } satisfies SimulationTask, { signal: AbortSignal.timeout(REVIVAL) }).catch(() => undefined);
  }, REVIVAL);
  revival.unref();

  const run = async <T>(task: SimulationTask): Promise<Simulated<T>> => {
    if (lanes.waiting('interactive') >= queueLimit) return { ok: false, failure: { kind: 'queue-full', retryAfter_s: retryAfter() } };
    if (!(await lanes.enter('interactive'))) throw new Error('The threads were ended before they came to this task.');
    try {
      return (await pool.run(task)) as Simulated<T>;
    } finally {
      lanes.leave();
    }
  };

  /** When about half of the queue will be done, going by the mean of what has run; before anything has, a second each. */
  const retryAfter = (): number => {
    const mean_s = pool.completed === 0 ? 1 : pool.histogram.runTime.mean / 1000;
    const half_s = (mean_s * lanes.waiting('interactive')) / (2 * threads);
    return Math.min(RETRY_AT_MOST, Math.max(RETRY_AT_LEAST, Math.ceil(half_s)));
  };

  let destroyed = false;
  return {
    judge: (pairing, options) => run({ kind: 'judge', pairing, options }),
    recordWaveforms: (pairing, dialPositions, place) => run({ kind: 'waveforms', pairing, dialPositions, place }),
    boundRequirement: (pairing, options) => run({ kind: 'requirement', pairing, options }),
    fitProfile: (question) => run({ kind: 'profile', question }),
    judgeInBackground: async (pairing, options) => {
      if (!(await lanes.enter('background'))) return { ok: false, failure: { kind: 'stopping' } };
      try {
        const runOnThread = (task: SimulationTask, signal: AbortSignal) => pool.run(task, { signal });
        const deadline_ms = (backgroundDeadline_s ?? BACKGROUND_DEADLINE_S) * 1000;
        const judged = await judgeDespiteLosses(runOnThread, pairing, options, deadline_ms);
        return destroyed && !judged.ok ? { ok: false, failure: { kind: 'stopping' } } : judged;
      } finally {
        lanes.leave();
      }
    },
    load: () => ({ threads: pool.threads.length, waiting: lanes.waiting('interactive'), completed: pool.completed }),
    close: async () => {
      await lanes.idle();
      clearInterval(revival);
      await pool.close();
    },
    destroy: async () => {
      destroyed = true;
      clearInterval(revival);
      lanes.close();
      await pool.destroy();
    },
  };
}
