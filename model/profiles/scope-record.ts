/**
 * Turns a scope record (time, voltage, current of a lamp on undimmed mains) into a phase table, and that into a lamp. Probe offsets, a
 * reversed probe and noise are taken out and reported; a record that is not what it should be is refused with the reason.
 */

import { fitFundamental } from './fundamental.ts';
import { averagePhases, type PhaseAverages } from './phase-averages.ts';
import type { PhaseTable } from './phase-table.ts';
import { type FitGround, fitPhaseTable, type ProfileFit } from './phase-table-fit.ts';
import { type ProfileOutcome, refused } from './profile-failures.ts';
import { clippedColumn } from './scope-clipping.ts';
import { columnFault, currentFault, periodFault, timeFault } from './scope-faults.ts';

/** Columns of one length, in s, V and A. */
export interface ScopeRecord {
  readonly time: ArrayLike<number>;
  readonly voltage: ArrayLike<number>;
  readonly current: ArrayLike<number>;
  /** row of the first sample in what was sent, from 1: messages count from there */
  readonly firstRow: number;
}

export interface ScopeTable {
  readonly table: PhaseTable;
  /** whole periods averaged, and samples in each */
  readonly periods: number;
  readonly samplesPerPeriod: number;
  /** what was taken out: V, A, whether the current was turned round, and r.m.s. noise of one sample (A) */
  readonly voltageOffset: number;
  readonly currentOffset: number;
  readonly currentReversed: boolean;
  readonly noise: number;
}

export function scopePhaseTable(record: ScopeRecord, ratedPower: number | null): ProfileOutcome<ScopeTable> {
  const timing = timeFault(record);
  if (timing !== null) return refused(timing);
  const n = record.time.length;
  const step = ((record.time[n - 1] as number) - (record.time[0] as number)) / (n - 1);
  const voltage = fitFundamental(record.voltage, step);
  const fault = columnFault(record, step, voltage) ?? periodFault(n, step, voltage);
  if (fault !== null) return refused(fault);
  const clipped = clippedColumn(record, step, voltage);
  if (clipped !== null) return refused(clipped);
  const averages: PhaseAverages = averagePhases(record, step, voltage);
  const bad = currentFault(averages, voltage, ratedPower);
  if (bad !== null) return refused(bad);
  return {
    ok: true,
    value: {
      table: { voltage: voltage.amplitude / Math.SQRT2, frequency: voltage.frequency, points: averages.points },
      periods: averages.periods,
      samplesPerPeriod: 1 / (voltage.frequency * step),
      voltageOffset: voltage.offset,
      currentOffset: averages.currentOffset,
      currentReversed: averages.reversed,
      noise: averages.noise,
    },
  };
}

export interface ScopeFit extends ProfileFit {
  readonly scope: ScopeTable;
}

export function fitScopeRecord(record: ScopeRecord, ground: FitGround): ProfileOutcome<ScopeFit> {
  const scope = scopePhaseTable(record, ground.ratedPower);
  if (!scope.ok) return scope;
  const fit = fitPhaseTable(scope.value.table, ground);
  return fit.ok ? { ok: true, value: { ...fit.value, scope: scope.value } } : fit;
}
