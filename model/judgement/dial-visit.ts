/** Sweeps the dial as observation/dial-sweep.ts does, but stops as soon as its rows have decided what was asked. */
import { layNetwork } from '../circuit/network.ts';
import { DimmerRun, type SegmentListener } from '../engine/dimmer-run.ts';
import { DialObserver, OBSERVATION_PLAN } from '../observation/dial-observation.ts';
import { dialRow } from '../observation/dial-row.ts';
import { thresholdsAt } from '../observation/dial-state.ts';
import { sweepDial, sweepStops } from '../observation/dial-sweep.ts';
import type { Pairing } from '../pairing.ts';
import type { DialRow, JudgeOptions } from '../verdict.ts';
import { type Goal, isDecided } from './early-ending.ts';
import type { EffortTally } from './effort.ts';

type Dial = Pick<JudgeOptions, 'dialPositions' | 'dropOutAngle' | 'thorough'>;

const planOf = (dial: Dial) => ({ ...OBSERVATION_PLAN, dropOutAngle: dial.dropOutAngle });

/** the whole dial, up and down */
export function visitWholeDial(pairing: Pairing, dial: Dial, effort: EffortTally): readonly DialRow[] {
  const { rows, counters } = sweepDial(pairing, dial.dialPositions, planOf(dial));
  effort.add(counters);
  effort.visited(rows.length);
  return rows;
}

/** the dial until `goal` is decided */
export function visitDial(pairing: Pairing, dial: Dial, goal: Goal, effort: EffortTally): readonly DialRow[] {
  if (dial.thorough === true) return visitWholeDial(pairing, dial, effort);
  const stops = sweepStops(dial.dialPositions);
  const rows: DialRow[] = [];
  walkDial(pairing, dial, effort, null, (row) => {
    rows.push(row);
    return isDecided(goal, pairing, rows, dial.dialPositions);
  });
  effort.spared(stops.length - rows.length);
  return rows;
}

/** Visits stop after stop until `isEnough` says so. `listener` hears of the segments of each stop before its row is told. */
export function walkDial(
  pairing: Pairing,
  dial: Dial,
  effort: EffortTally,
  listener: SegmentListener | null,
  isEnough: (row: DialRow) => boolean,
): void {
  const network = layNetwork(pairing);
  const thresholds = thresholdsAt(pairing.mains.frequency);
  let observer: DialObserver | null = null;
  const close = (): void => {
    if (observer === null) return;
    const { run, steps } = observer;
    effort.add({ halfCycles: run.index, steps, events: run.events, modesBuilt: run.modesBuilt });
    observer = null;
  };
  for (const { sweep, position } of sweepStops(dial.dialPositions)) {
    observer ??= new DialObserver(new DimmerRun(network, pairing.dimmer), planOf(dial), listener);
    const observation = observer.observe(position);
    const row = dialRow(observation, sweep, position, Math.PI / network.omega, thresholds);
    if (observation.outcome === 'undecided') close();
    effort.visited(1);
    if (isEnough(row)) break;
  }
  close();
}
