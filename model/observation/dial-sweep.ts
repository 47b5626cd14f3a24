/**
 * Sweeps the dial up from dark, lamps discharged, and down again with the state carried over: where a lamp lights on the way up and
 * where it goes out on the way down differ. A position that cannot be decided ends that run; the next one starts afresh from rest.
 */
import { layNetwork, type Network } from '../circuit/network.ts';
import { DimmerRun } from '../engine/dimmer-run.ts';
import type { Pairing } from '../pairing.ts';
import type { Counters, DialRow, Sweep } from '../verdict.ts';
import { DialObserver, OBSERVATION_PLAN, type ObservationPlan } from './dial-observation.ts';
import { dialRow } from './dial-row.ts';
import { thresholdsAt } from './dial-state.ts';

export interface SweepResult {
  readonly rows: readonly DialRow[];
  readonly counters: Counters;
}

/** the stops of a sweep: up, then down again from the top; one position alone is visited once */
export function sweepStops(positions: readonly number[]): { readonly sweep: Sweep; readonly position: number }[] {
  const up = positions.map((position) => ({ sweep: 'up' as const, position }));
  if (positions.length < 2) return up;
  return [...up, ...positions.toReversed().map((position) => ({ sweep: 'down' as const, position }))];
}

export function sweepDial(pairing: Pairing, positions: readonly number[], plan: ObservationPlan = OBSERVATION_PLAN): SweepResult {
  const network: Network = layNetwork(pairing);
  const halfPeriod = Math.PI / network.omega;
  const thresholds = thresholdsAt(pairing.mains.frequency);
  const counters = { halfCycles: 0, steps: 0, events: 0, modesBuilt: 0 };
  let observer: DialObserver | null = null;
  const close = (): void => {
    if (observer === null) return;
    counters.halfCycles += observer.run.index;
    counters.steps += observer.steps;
    counters.events += observer.run.events;
    counters.modesBuilt += observer.run.modesBuilt;
    observer = null;
  };
  const rows: DialRow[] = [];
  for (const { sweep, position } of sweepStops(positions)) {
    observer ??= new DialObserver(new DimmerRun(network, pairing.dimmer), plan);
    const observation = (observer as DialObserver).observe(position);
    rows.push(dialRow(observation, sweep, position, halfPeriod, thresholds));
    if (observation.outcome === 'undecided') close();
  }
  close();
  return { rows, counters };
}
