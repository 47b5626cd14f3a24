/** Runs a pairing's circuit for a number of half-cycles and keeps everything that happened: the records and the segments in closed form. */
import { layNetwork } from '../../model/circuit/network.ts';
import { DimmerRun } from '../../model/engine/dimmer-run.ts';
import type { HalfCycle } from '../../model/engine/half-cycle.ts';
import { Segment } from '../../model/engine/segment.ts';
import type { Pairing } from '../../model/pairing.ts';

export interface RecordedHalfCycle {
  readonly record: HalfCycle;
  readonly segments: readonly Segment[];
}

export function startRun(pairing: Pairing, dial = 100): DimmerRun {
  const run = new DimmerRun(layNetwork(pairing), pairing.dimmer);
  run.setDial(dial);
  return run;
}

/** lets a run go on; an undecided half-cycle is a failure */
export function goOn(run: DimmerRun, halfCycles: number): RecordedHalfCycle[] {
  const recorded: RecordedHalfCycle[] = [];
  const segments: Segment[] = [];
  run.segmentListener = {
    segment: (mode, coordinates, start, duration, halfCycle) => {
      segments.push(new Segment(mode, coordinates, start, duration, halfCycle));
    },
  };
  for (let k = 0; k < halfCycles; k++) {
    const { outcome, record } = run.finishHalfCycle();
    if (outcome !== 'done') throw new Error(`half-cycle ${run.index} is undecided`);
    recorded.push({ record, segments: segments.splice(0) });
  }
  run.segmentListener = null;
  return recorded;
}

/** from rest */
export const runFromRest = (pairing: Pairing, halfCycles: number, dial = 100): RecordedHalfCycle[] =>
  goOn(startRun(pairing, dial), halfCycles);

/** sum over a half-cycle's segments */
export const total = (halfCycle: RecordedHalfCycle, of: (segment: Segment) => number): number =>
  halfCycle.segments.reduce((sum, s) => sum + of(s), 0);

/** value of an output at an angle (degrees) of a half-cycle, just after it where it jumps */
export function valueAt(halfCycle: RecordedHalfCycle, halfPeriod: number, angle: number, output: number): number {
  const time = (angle / 180) * halfPeriod;
  const segment = halfCycle.segments.findLast((s) => s.start <= time) ?? halfCycle.segments[0];
  if (segment === undefined) throw new Error('a half-cycle without segments');
  return segment.value(output, time - segment.start);
}

/** the last of a settled run's half-cycles of each polarity: [positive, negative] */
export function settledPair(pairing: Pairing, settle: number, dial = 100): [RecordedHalfCycle, RecordedHalfCycle] {
  const even = settle + (settle % 2);
  const run = startRun(pairing, dial);
  goOn(run, even);
  return goOn(run, 2) as [RecordedHalfCycle, RecordedHalfCycle];
}
