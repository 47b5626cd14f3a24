/** Entry of a worker thread: one task in, the model's outcome out. It holds no state and no database. */
import { move, transferableSymbol, valueSymbol } from 'piscina';
import { recordWaveforms, requirementBoundary } from '../../model/index.ts';
import { judgeAsked } from './asked-judging.ts';
import { fitProfile } from './profile-fitting.ts';
import type { SimulationTask } from './simulation.ts';

export default function runTask(task: SimulationTask): unknown {
  switch (task.kind) {
    case 'judge':
      if (task.begun !== undefined) Atomics.store(task.begun, 0, 1);
      return judgeAsked(task.pairing, task.options);
    case 'waveforms':
      return withColumnsMoved(recordWaveforms(task.pairing, task.dialPositions, task.place));
    case 'requirement':
      return requirementBoundary(task.pairing, task.options);
    case 'profile':
      return fitProfile(task.question);
    case 'nothing':
      return undefined;
  }
}

/** Hands the columns' buffers over instead of copying them. */
function withColumnsMoved(outcome: ReturnType<typeof recordWaveforms>): unknown {
  if (!outcome.ok) return outcome;
  const columns = Object.values(outcome.value).filter((value) => value instanceof Float64Array);
  // A set, because columns may share a buffer and none can be moved twice.
  const buffers = [...new Set(columns.map(({ buffer }) => buffer))];
  return move({ [transferableSymbol]: buffers, [valueSymbol]: outcome });
}
