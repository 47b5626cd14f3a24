/** Sums an observation up into one dial row. */

import { NEAR_EDGE } from '../tolerances.ts';
import type { DialRow, DialState, Sweep } from '../verdict.ts';
import type { DialObservation, ObservedHalfCycle } from './dial-observation.ts';
import { type DialThresholds, dialStates } from './dial-state.ts';
import { closestMargins } from './margins.ts';

const mean = (values: readonly number[]): number => (values.length === 0 ? 0 : values.reduce((a, b) => a + b, 0) / values.length);

/** (max - min)/(max + min), 0 where nothing was delivered */
function modulation(values: readonly number[]): number {
  if (values.length === 0) return 0;
  // a half-cycle in which the lamps' capacitors gave more back than was drawn delivered nothing
  const most = Math.max(0, ...values);
  const least = Math.max(0, Math.min(...values));
  return most + least > 0 ? (most - least) / (most + least) : 0;
}

function energyOf(halfCycles: readonly ObservedHalfCycle[], polarity: 0 | 1): number[] {
  return halfCycles.filter((h) => h.record.index % 2 === polarity).map((h) => h.measures.lampEnergy);
}

export function dialRow(
  observation: DialObservation,
  sweep: Sweep,
  position: number,
  halfPeriod: number,
  thresholds: DialThresholds,
): DialRow {
  const { halfCycles } = observation;
  const counts = halfCycles.map((h) => h.record.firings.length);
  const lit = halfCycles.filter((h) => h.record.firings.length > 0);
  const firstAngles = lit.map((h) => h.record.firings[0] as number);
  const time = halfCycles.length * halfPeriod || 1;
  const sum = (pick: (h: ObservedHalfCycle) => number): number => halfCycles.reduce((total, h) => total + pick(h), 0);
  const margins = closestMargins([
    ...halfCycles.map((h) => h.margins),
    { latching: null, holding: null, breakover: observation.breakoverWhileSettling },
  ]);
  const measured = {
    firings: {
      min: counts.length === 0 ? 0 : Math.min(...counts),
      mean: mean(counts),
      max: counts.length === 0 ? 0 : Math.max(...counts),
    },
    silentShare: counts.length === 0 ? 0 : 1 - lit.length / counts.length,
    repeatsAfter: observation.repeatsAfter,
    settled: observation.settled,
    observed: halfCycles.length,
    failedLatches: mean(halfCycles.map((h) => h.record.failedLatches)),
    earlyDropOuts: mean(halfCycles.map((h) => h.earlyDropOuts)),
    firingAngle: lit.length === 0 ? null : mean(firstAngles),
    firingAngleSpread: lit.length === 0 ? null : Math.max(...firstAngles) - Math.min(...firstAngles),
    conductionAngle: lit.length === 0 ? null : mean(lit.map((h) => h.record.conduction)),
    polarityDifference: lit.length === 0 ? 0 : modulation([mean(energyOf(halfCycles, 0)), mean(energyOf(halfCycles, 1))]),
    variation: lit.length === 0 ? 0 : Math.max(modulation(energyOf(halfCycles, 0)), modulation(energyOf(halfCycles, 1))),
    lampPower: sum((h) => h.measures.lampEnergy) / time,
    rmsCurrent: Math.sqrt(sum((h) => h.measures.squaredCurrent) / time),
    peakCurrent: halfCycles.reduce((most, h) => Math.max(most, h.measures.peakCurrent), 0),
    dcCurrent: sum((h) => h.measures.charge) / time,
    diacStuck: halfCycles.some((h) => h.record.diacStuck),
    margins,
    nearEdge: [margins.latching, margins.holding, margins.breakover].some((m) => m !== null && m < NEAR_EDGE),
  };
  const states: DialState[] = observation.outcome === 'undecided' ? ['undecided'] : dialStates(measured, thresholds);
  return { sweep, position, state: states[0] as DialState, alsoStates: states.slice(1), ...measured };
}
