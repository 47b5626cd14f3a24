/** Fitting gets known circuits back from what ngspice recorded of them, and refuses what no lamp of the model draws. */
import { describe, expect, test } from 'vitest';
import type { IvPoint, Lamp } from '../../model/pairing.ts';
import type { PhaseTable } from '../../model/profiles/phase-table.ts';
import { fitPhaseTable, type ProfileFit } from '../../model/profiles/phase-table-fit.ts';
import { RESIDUAL_LIMIT } from '../../model/profiles/profile-tolerances.ts';
import { runUndimmed } from '../../model/profiles/undimmed-lamp.ts';
import { ngspiceVersion } from '../ngspice/run.ts';
import { dropperCircuits, type KnownCircuit, reservoirCircuits, staticCircuits } from './circuits.ts';
import { frozenTable } from './frozen.ts';
import { recordWithNgspice } from './ngspice-record.ts';

const ground = (lamp: Lamp) => ({ seriesResistance: lamp.input.seriesResistance, minimumVoltage: 50, ratedPower: null });

function fitted(table: PhaseTable, lamp: Lamp): ProfileFit {
  const fit = fitPhaseTable(table, ground(lamp));
  if (!fit.ok) throw new Error(fit.failure.detail);
  return fit.value;
}

function refusal(table: PhaseTable) {
  const fit = fitPhaseTable(table, { seriesResistance: 22, minimumVoltage: 50, ratedPower: null });
  return fit.ok ? { kind: 'fitted', detail: '' } : fit.failure;
}

function onCurve(points: readonly IvPoint[], voltage: number): number {
  const above = points.findIndex((p) => p.voltage >= voltage);
  if (above < 0) return points[points.length - 1]?.current ?? 0;
  const [a, b] = [points[above - 1] ?? { voltage: 0, current: 0 }, points[above] as IvPoint];
  return a.current + ((b.current - a.current) * (voltage - a.voltage)) / (b.voltage - a.voltage);
}

function withinFivePercent(found: number, known: number): void {
  expect(Math.abs(found / known - 1)).toBeLessThan(0.05);
}

function expectStatic(circuit: KnownCircuit, table: PhaseTable): void {
  const fit = fitted(table, circuit.lamp);
  expect(fit.form).toBe('iv-table');
  expect(fit.residual).toBeLessThan(0.01);
  withinFivePercent(fit.lamp.input.capacitance, circuit.lamp.input.capacitance);
  if (fit.lamp.load.kind !== 'iv-table' || circuit.lamp.load.kind !== 'iv-table') throw new Error('not a table');
  const peak = circuit.sine.voltage * Math.SQRT2;
  const top = Math.max(...circuit.lamp.load.points.map((p) => p.current));
  for (let voltage = 0.1 * peak; voltage < 0.98 * peak; voltage += 0.02 * peak) {
    const known = onCurve(circuit.lamp.load.points, voltage);
    // of the current itself, or of the curve's top where next to nothing flows
    expect(Math.abs(onCurve(fit.lamp.load.points, voltage) - known)).toBeLessThan(0.05 * Math.max(known, 0.2 * top));
  }
}

function expectReservoir(circuit: KnownCircuit, table: PhaseTable): void {
  const fit = fitted(table, circuit.lamp);
  expect(fit.form).toBe('reservoir');
  expect(fit.residual).toBeLessThan(0.02);
  const [found, known] = [fit.lamp.load, circuit.lamp.load];
  if (found.kind !== 'reservoir' || known.kind !== 'reservoir') throw new Error('not a reservoir');
  if (found.drain.kind !== 'power' || known.drain.kind !== 'power') throw new Error('not a constant power');
  withinFivePercent(found.capacitance, known.capacitance);
  withinFivePercent(found.drain.power, known.drain.power);
  withinFivePercent(found.surgeResistance + fit.lamp.input.seriesResistance, known.surgeResistance + circuit.lamp.input.seriesResistance);
  withinFivePercent(fit.lamp.input.capacitance, circuit.lamp.input.capacitance);
}

describe('a phase table recorded by ngspice (frozen)', () => {
  test.each(staticCircuits)('gives $name back within 5 %', (circuit) => {
    expectStatic(circuit, frozenTable(circuit));
  });

  test.each(reservoirCircuits)('gives $name back within 5 %', (circuit) => {
    expectReservoir(circuit, frozenTable(circuit));
  });

  test('gives a reservoir lamp back from one half-cycle at 5 degrees too', () => {
    const circuit = reservoirCircuits[0] as KnownCircuit;
    const table = frozenTable(circuit);
    expectReservoir(circuit, { ...table, points: table.points.filter((p) => p.phase < 180 && p.phase % 5 === 0) });
  });

  test('is met at its own points by the undimmed run of this model', () => {
    for (const circuit of [...staticCircuits, ...reservoirCircuits, ...dropperCircuits]) {
      const table = frozenTable(circuit);
      const run = runUndimmed(circuit.lamp, circuit.sine);
      if (run === null) throw new Error('does not run');
      const error = Math.hypot(...table.points.map((p) => p.current - run.currentAt(p.phase)));
      expect(error / Math.hypot(...table.points.map((p) => p.current))).toBeLessThan(0.01);
    }
  });
});

const missing = ngspiceVersion() === null;

describe.skipIf(missing)(missing ? 'skipped: the program ngspice is not installed' : 'a phase table recorded by ngspice now', () => {
  test.each(staticCircuits.slice(0, 1))('gives $name back within 5 %', (circuit) => {
    expectStatic(circuit, { ...circuit.sine, points: recordWithNgspice(circuit) });
  });

  test.each(reservoirCircuits.slice(0, 1))('gives $name back within 5 %', (circuit) => {
    expectReservoir(circuit, { ...circuit.sine, points: recordWithNgspice(circuit) });
  });
});

test('a series capacitor is refused as a phase table: no form that is fitted has one', () => {
  expect(refusal(frozenTable(dropperCircuits[0] as KnownCircuit))).toMatchObject({ kind: 'residual-too-large' });
});

describe('the residual', () => {
  test('is what a new run of the fitted lamp leaves of the points', () => {
    for (const circuit of [staticCircuits[2], reservoirCircuits[1]] as KnownCircuit[]) {
      const table = frozenTable(circuit);
      const fit = fitted(table, circuit.lamp);
      const run = runUndimmed(fit.lamp, circuit.sine);
      if (run === null) throw new Error('does not run');
      const error = Math.hypot(...table.points.map((p) => p.current - run.currentAt(p.phase)));
      // evenly spaced points weigh alike
      expect(fit.residual).toBeCloseTo(error / Math.hypot(...table.points.map((p) => p.current)), 6);
    }
  });

  test('weighs each point by the stretch it stands for, so that crowded points do not decide', () => {
    const circuit = staticCircuits[0] as KnownCircuit;
    const all = frozenTable(circuit).points.filter((p) => p.phase < 180);
    const even = fitted({ ...circuit.sine, points: all.filter((p) => p.phase % 4 === 0) }, circuit.lamp);
    const crowded = fitted({ ...circuit.sine, points: all.filter((p) => p.phase % 4 === 0 || p.phase < 30) }, circuit.lamp);
    expect(crowded.recorded.rmsCurrent / even.recorded.rmsCurrent).toBeCloseTo(1, 2);
  });
});

describe('a refused phase table', () => {
  const points = (current: (phase: number) => number, step = 2, end = 358) =>
    Array.from({ length: end / step + 1 }, (_, k) => ({ phase: k * step, current: current(k * step) }));
  const sine = { voltage: 230, frequency: 50 };
  const rad = Math.PI / 180;

  test('of a lamp that uses one polarity says that the half-cycles differ, and how much is left', () => {
    const failure = refusal({ ...sine, points: points((p) => Math.max(0, 0.05 * Math.sin(p * rad))) });
    expect(failure).toMatchObject({
      kind: 'residual-too-large',
      limit: RESIDUAL_LIMIT,
      detail: expect.stringContaining('half-cycles differ'),
    });
    expect('residual' in failure && failure.residual).toBeGreaterThan(RESIDUAL_LIMIT);
  });

  test('with current that lags the voltage says that the halves about the crest differ', () => {
    const failure = refusal({ ...sine, points: points((p) => 0.05 * Math.sin((p - 40) * rad)) });
    expect(failure).toMatchObject({ kind: 'residual-too-large', detail: expect.stringContaining('before the crest') });
  });

  test('with jumps from point to point says that it is noisy', () => {
    const failure = refusal({ ...sine, points: points((p) => 0.05 * Math.sin(p * rad) + (p % 4 === 0 ? 0.03 : -0.03)) });
    expect(failure).toMatchObject({ kind: 'residual-too-large', detail: expect.stringContaining('noisy') });
  });

  test('with a pulse caught by two points asks for more points', () => {
    const failure = refusal({ ...sine, points: points((p) => (p === 60 || p === 80 ? 0.2 : 0), 20, 160) });
    expect(failure).toMatchObject({ kind: 'arc-not-resolved', points: 2 });
  });

  test.each([
    ['too few points', points((p) => p, 30, 150), 'points'],
    ['more points than 720', points(() => 0.01, 0.4, 359.6), 'points'],
    ['phases that do not rise', [...points(() => 0.01, 10, 170), { phase: 170, current: 0.01 }], 'points[18].phase'],
    ['a phase beyond 360 degrees', [...points(() => 0.01, 10, 350), { phase: 370, current: 0.01 }], 'points[36].phase'],
    ['a current that is no number', points((p) => (p === 20 ? Number.NaN : 0.01), 10, 170), 'points[2].current'],
    ['half a half-cycle', points(() => 0.01, 10, 90), 'points'],
    ['no current at all', points(() => 0, 10, 170), 'points'],
  ])('names the place of %s', (_, list, path) => {
    const failure = refusal({ ...sine, points: list });
    expect(failure).toMatchObject({ kind: 'invalid-profile' });
    expect('issues' in failure && failure.issues.map((issue) => issue.path)).toContain(path);
  });
});

test('what an undimmed record cannot show is listed as taken, and stays as given', () => {
  const circuit = reservoirCircuits[0] as KnownCircuit;
  const fit = fitPhaseTable(frozenTable(circuit), { seriesResistance: 15, minimumVoltage: 70, ratedPower: 8 });
  if (!fit.ok) throw new Error(fit.failure.detail);
  expect(fit.value.taken.map((t) => t.path)).toEqual(['input.seriesResistance', 'load.minimumVoltage', 'load.drain.kind']);
  expect(fit.value.lamp).toMatchObject({ ratedPower: 8, input: { seriesResistance: 15 }, load: { minimumVoltage: 70 } });
});
