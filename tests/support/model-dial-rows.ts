/** Dial rows as an observation would report them, for tests of what is made of them: a steady lit row unless a test says otherwise. */
import type { DialRow, Sweep } from '../../model/verdict.ts';

export function dialRow(position: number, change: Partial<DialRow> = {}): DialRow {
  return {
    sweep: 'up',
    position,
    state: 'steady',
    alsoStates: [],
    firings: { min: 1, mean: 1, max: 1 },
    silentShare: 0,
    repeatsAfter: 1,
    settled: 5,
    observed: 2,
    failedLatches: 0,
    earlyDropOuts: 0,
    firingAngle: 90,
    firingAngleSpread: 0,
    conductionAngle: 85,
    polarityDifference: 0,
    variation: 0,
    lampPower: 20,
    rmsCurrent: 0.2,
    peakCurrent: 0.5,
    dcCurrent: 0,
    diacStuck: false,
    margins: { latching: null, holding: null, breakover: null },
    nearEdge: false,
    ...change,
  };
}

export const darkRow = (position: number, change: Partial<DialRow> = {}): DialRow =>
  dialRow(position, {
    state: 'dark',
    firings: { min: 0, mean: 0, max: 0 },
    silentShare: 1,
    firingAngle: null,
    firingAngleSpread: null,
    conductionAngle: null,
    lampPower: 0,
    ...change,
  });

export const refiringRow = (position: number, firings: number, change: Partial<DialRow> = {}): DialRow =>
  dialRow(position, { state: 're-firing', firings: { min: firings, mean: firings, max: firings }, ...change });

/** both sweeps of a dial, each position made by `row` */
export function dialOf(positions: readonly number[], row: (position: number, sweep: Sweep) => DialRow): DialRow[] {
  const up = positions.map((p) => ({ ...row(p, 'up'), sweep: 'up' as const }));
  const down = positions.toReversed().map((p) => ({ ...row(p, 'down'), sweep: 'down' as const }));
  return [...up, ...down];
}
