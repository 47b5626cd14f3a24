/**
 * Judges a pairing that nobody waits for, on a thread that may die or hang over it: a deadline ends the thread, one more attempt is
 * made in a fresh one, and a second loss is an outcome. It never throws for what a pairing does to its thread.
 */
import type { AskedCircuit, AskedJudgement, AskedOptions } from './asked-circuit.ts';
import type { BackgroundJudged, CircuitFailure, SimulationTask } from './simulation.ts';

/** Runs one task on a free thread; aborting the signal ends that thread. Rejects where the thread was lost or the task threw. */
export type RunOnThread = (task: SimulationTask, signal: AbortSignal) => Promise<unknown>;

const ATTEMPTS = 2;
/** how finely the deadline is watched: a thread is ended between 1 and 1 + 1/4 deadlines after it began */
const TICKS = 4;

export async function judgeDespiteLosses(
  run: RunOnThread,
  pairing: AskedCircuit,
  options: AskedOptions,
  deadline_ms: number,
): Promise<BackgroundJudged> {
  let detail = '';
  for (let attempt = 1; attempt <= ATTEMPTS; attempt += 1) {
    const from = performance.now();
    const tried = await attemptOnce(run, pairing, options, deadline_ms);
    if (tried.lost === null) {
      return tried.outcome.ok ? { ...tried.outcome, took_ms: performance.now() - from } : tried.outcome;
    }
    detail = tried.lost;
  }
  return { ok: false, failure: { kind: 'thread-lost', detail, attempts: ATTEMPTS } };
}

type Outcome = { readonly ok: true; readonly value: AskedJudgement } | { readonly ok: false; readonly failure: CircuitFailure };

type Attempt =
  | { readonly lost: null; readonly outcome: Outcome }
  /** why the thread gave no outcome */
  | { readonly lost: string };

async function attemptOnce(run: RunOnThread, pairing: AskedCircuit, options: AskedOptions, deadline_ms: number): Promise<Attempt> {
  const begun = new Int32Array(new SharedArrayBuffer(Int32Array.BYTES_PER_ELEMENT));
  const ending = new AbortController();
  let ticks = 0;
  // A fresh thread first has to load the model, which is not the pairing's fault: time counts only once the pairing has begun.
  const watch = setInterval(() => {
    if (Atomics.load(begun, 0) === 0) return;
    ticks += 1;
    if (ticks > TICKS) ending.abort();
  }, deadline_ms / TICKS);
  try {
    return { lost: null, outcome: (await run({ kind: 'judge', pairing, options, begun }, ending.signal)) as Outcome };
  } catch (error) {
    if (ending.signal.aborted) return { lost: `the thread gave no answer within ${deadline_ms / 1000} s and was ended` };
    return { lost: error instanceof Error ? error.message : String(error) };
  } finally {
    clearInterval(watch);
  }
}
