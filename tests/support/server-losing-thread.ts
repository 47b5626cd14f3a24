/**
 * Entry of a thread that a test can lose: certain mains frequencies, and filament lamps of as many ohms, kill it or hang it. Everything
 * else is judged as ever. What has died once before is told from a file that the marked pairings leave behind.
 */
import { existsSync, writeFileSync } from 'node:fs';
import type { SimulationTask } from '../../server/simulation/simulation.ts';
import runTask from '../../server/simulation/simulation-thread.ts';

/** Hz of the mains, or ohms of the lamp */
export const LOSSES = { diesAlways: 61, hangsAlways: 62, throwsAlways: 63, diesOnce: 64 } as const;

// While a file beside the trace says so, no thread can be started.
const trace = process.env.LOSING_THREAD_TRACE;
if (trace !== undefined && existsSync(`${trace}-no-start`)) {
  writeFileSync(`${trace}-tried`, '');
  process.exit(9);
}

export default function runOrLose(task: SimulationTask): unknown {
  const marks = marksOf(task);
  if (marks.includes(LOSSES.diesAlways)) process.exit(7);
  if (marks.includes(LOSSES.throwsAlways)) throw new Error('A bug, for a test.');
  if (marks.includes(LOSSES.hangsAlways)) {
    if (task.kind === 'judge' && task.begun !== undefined) Atomics.store(task.begun, 0, 1);
    for (;;);
  }
  if (marks.includes(LOSSES.diesOnce)) {
    if (trace === undefined) throw new Error('LOSING_THREAD_TRACE names the file of what has died before.');
    if (!existsSync(trace)) {
      writeFileSync(trace, '');
      process.exit(8);
    }
  }
  return runTask(task);
}

function marksOf(task: SimulationTask): readonly number[] {
  if (task.kind !== 'judge') return 'pairing' in task ? [task.pairing.mains.frequency] : [];
  const ohms = task.pairing.lamps.flatMap((group) =>
    group.known === 'circuit' && group.lamp.load.kind === 'resistive' ? [group.lamp.load.resistance] : [],
  );
  return [task.pairing.mains.frequency, ...ohms];
}
