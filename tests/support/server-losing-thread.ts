/**
 * Entry of a thread that a test can lose: certain mains frequencies kill it or hang it. Everything else is judged as ever. What has
 * died once before is told from a file that the marked pairings leave behind.
 */
import { existsSync, writeFileSync } from 'node:fs';
import type { SimulationTask } from '../../server/simulation/simulation.ts';
import runTask from '../../server/simulation/simulation-thread.ts';

/** Hz */
export const LOSSES = { diesAlways: 61, hangsAlways: 62, throwsAlways: 63, diesOnce: 64 } as const;

export default function runOrLose(task: SimulationTask): unknown {
  const frequency = 'pairing' in task ? task.pairing.mains.frequency : 0;
  if (frequency === LOSSES.diesAlways) process.exit(7);
  if (frequency === LOSSES.throwsAlways) throw new Error('A bug, for a test.');
  if (frequency === LOSSES.hangsAlways) {
    if (task.kind === 'judge' && task.begun !== undefined) Atomics.store(task.begun, 0, 1);
    for (;;);
  }
  if (frequency === LOSSES.diesOnce) {
    const trace = process.env.LOSING_THREAD_TRACE;
    if (trace === undefined) throw new Error('LOSING_THREAD_TRACE names the file of what has died before.');
    if (!existsSync(trace)) {
      writeFileSync(trace, '');
      process.exit(8);
    }
  }
  return runTask(task);
}
