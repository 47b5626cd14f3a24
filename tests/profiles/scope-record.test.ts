/** A scope record comes back as the lamp that was recorded, whatever the probes added; what is no such record is refused by its fault. */
import { describe, expect, test } from 'vitest';
import type { Lamp } from '../../model/pairing.ts';
import { fitScopeRecord, type ScopeRecord } from '../../model/profiles/scope-record.ts';
import { emulator, europe, linearString, reservoir } from '../ngspice/circuits.ts';
import { recorded, type Scope } from './recorded.ts';

const lamps = {
  reservoir: { lamp: reservoir(8, 4.7e-6, 50, { capacitance: 22e-9 }), power: 8 },
  emulated: { lamp: emulator(8, europe, 47e-9), power: 8 },
  string: { lamp: linearString(200, 0.03, 47e-9), power: 4.8 },
  bareString: { lamp: linearString(200, 0.03, 0), power: 4.8 },
} satisfies { [name: string]: { lamp: Lamp; power: number } };
type Name = keyof typeof lamps;

const ground = (ratedPower: number | null) => ({ seriesResistance: 22, minimumVoltage: 50, ratedPower });

function fitted(name: Name, change: Partial<Scope> = {}) {
  const fit = fitScopeRecord(recorded(lamps[name].lamp, change), ground(lamps[name].power));
  if (!fit.ok) throw new Error(`${fit.failure.kind}: ${fit.failure.detail}`);
  return fit.value;
}

function fault(record: ScopeRecord, ratedPower: number | null = 8) {
  const fit = fitScopeRecord(record, ground(ratedPower));
  return fit.ok ? { kind: 'fitted', detail: '' } : fit.failure;
}

const near = (found: number, known: number, share = 0.05): void => expect(Math.abs(found / known - 1)).toBeLessThan(share);

function expectReservoir(change: Partial<Scope>): void {
  const { lamp } = fitted('reservoir', change);
  if (lamp.load.kind !== 'reservoir' || lamp.load.drain.kind !== 'power') throw new Error(`fitted as ${lamp.load.kind}`);
  near(lamp.load.capacitance, 4.7e-6);
  near(lamp.load.drain.power, 8);
  near(lamp.load.surgeResistance + lamp.input.seriesResistance, 32, 0.08);
}

function expectEmulated(change: Partial<Scope>): void {
  const { lamp } = fitted('emulated', change);
  if (lamp.load.kind !== 'iv-table') throw new Error(`fitted as ${lamp.load.kind}`);
  const last = lamp.load.points[lamp.load.points.length - 1] ?? { voltage: 1, current: 0 };
  // the curve of an 8 W emulated resistor at 230 V: sqrt 2 P/V at the crest
  near(last.current / last.voltage, 8 / 230 ** 2);
  near(lamp.input.capacitance, 47e-9, 0.08);
}

describe('a scope record gives the lamp back', () => {
  test.each<[string, Partial<Scope>]>([
    ['with probe offsets and noise', {}],
    ['without any', { offsets: [0, 0], noise: [0, 0] }],
    ['with the current probe reversed', { reversed: [false, true] }],
    ['with the voltage probe reversed', { reversed: [true, false] }],
    ['with both probes reversed', { reversed: [true, true] }],
    ['over exactly one period', { periods: 1 }],
    ['over twenty periods and a bit', { periods: 20.7 }],
    ['at 100 samples a period', { samplesPerPeriod: 100, periods: 20 }],
    ['at 40 samples a period', { samplesPerPeriod: 40, periods: 40 }],
    ['off the nominal frequency', { frequency: 49.7 }],
    ['at eight bits', { bits: 8, noise: [2, 0.002] }],
    ['with 3 % of third harmonic in the voltage', { thirdHarmonic: 0.03, noise: [0, 0] }],
  ])('%s', (_, change) => {
    expectEmulated(change);
    expectReservoir(change);
  });

  test('and reports what it took out', () => {
    const { scope } = fitted('reservoir', { reversed: [false, true] });
    expect(scope.voltageOffset).toBeCloseTo(2, 0);
    expect(scope.currentOffset).toBeCloseTo(0.004, 3);
    expect(scope.currentReversed).toBe(true);
    near(scope.noise, 0.002, 0.2);
    expect(scope.periods).toBe(5);
    expect(scope.samplesPerPeriod).toBeCloseTo(400, 0);
    near(scope.table.frequency, 50, 1e-4);
    near(scope.table.voltage, 230, 1e-3);
  });

  test.each<[string, Name, Partial<Scope>]>([
    ['a regulated string', 'bareString', {}],
    ['a regulated string without noise', 'bareString', { noise: [0, 0] }],
    ['a regulated string at eight bits', 'bareString', { bits: 8, noise: [1, 0.001] }],
    ['a regulated string at eight bits without noise', 'string', { bits: 8, noise: [0, 0] }],
    ['a sine at eight bits', 'emulated', { bits: 8, noise: [0, 0] }],
  ])('and does not take the flat top of %s for clipping', (_, name, change) => {
    expect(fitted(name, change).residual).toBeLessThan(0.1);
  });
});

const record = recorded(lamps.reservoir.lamp);
const times = (values: readonly number[], factor: number): number[] => values.map((v) => v * factor);
const changed = (values: readonly number[], at: number, to: number): number[] => values.map((v, k) => (k === at ? to : v));

describe('a record is refused', () => {
  test.each<[string, ScopeRecord, string, string]>([
    ['that holds less than a period', recorded(lamps.reservoir.lamp, { periods: 0.9 }), 'no-full-period', '18 ms'],
    ['that holds less than half a period', recorded(lamps.reservoir.lamp, { periods: 0.4 }), 'no-full-period', 'no full period'],
    ['that holds nothing', { time: [], voltage: [], current: [], firstRow: 1 }, 'no-full-period', '0 ms'],
    ['with 39 samples a period', recorded(lamps.reservoir.lamp, { samplesPerPeriod: 39, periods: 9 }), 'too-few-samples', '39 samples'],
    ['with voltage and current exchanged', { ...record, voltage: record.current, current: record.voltage }, 'columns-swapped', 'exchanged'],
    [
      'with the columns exchanged and the current in mA',
      { ...record, voltage: times(record.current, 1000), current: times(record.voltage, 0.001) },
      'columns-swapped',
      'exchanged',
    ],
    ['with time and voltage exchanged', { ...record, time: record.voltage, voltage: record.time }, 'columns-swapped', 'Time and voltage'],
    ['with time and current exchanged', { ...record, time: record.current, current: record.time }, 'columns-swapped', 'Time and current'],
    [
      'with a current in A where mA was meant',
      { ...record, current: times(record.current, 1000) },
      'wrong-units',
      'amperes where milliamperes',
    ],
    [
      'with a current in mA where A was meant',
      { ...record, current: times(record.current, 1e-3) },
      'wrong-units',
      'milliamperes where amperes',
    ],
    ['with ten times the rated power', { ...record, current: times(record.current, 10) }, 'power-disagrees', 'probe'],
    ['whose time is in ms where s was meant', { ...record, time: times(record.time, 1000) }, 'frequency-out-of-range', '0.05 Hz'],
    ['of 40 Hz', recorded(lamps.reservoir.lamp, { frequency: 40 }), 'frequency-out-of-range', '40 Hz'],
    ['of 400 Hz', recorded(lamps.emulated.lamp, { frequency: 400, periods: 40 }), 'frequency-out-of-range', '400 Hz'],
    ['of 2300 V', { ...record, voltage: times(record.voltage, 10) }, 'voltage-out-of-range', '2300 V'],
    ['of 23 V', { ...record, voltage: times(record.voltage, 0.1) }, 'voltage-out-of-range', '23 V'],
    ['that is mostly noise', recorded(lamps.reservoir.lamp, { noise: [1, 0.2] }), 'too-noisy', 'noisy'],
    ['without any current', { ...record, current: record.current.map(() => 0.01) }, 'no-current', 'same throughout'],
    [
      'whose voltage is phase-cut',
      { ...record, voltage: record.voltage.map((v, k) => ((k * 0.9 + 77) % 180 < 60 ? 0 : v)) },
      'voltage-not-a-sine',
      'not a sine',
    ],
    ['whose time stands still', { ...record, time: changed(record.time, 100, record.time[99] as number) }, 'time-not-rising', 'Row 102'],
    ['whose time falls from row to row', { ...record, time: times(record.time, -1) }, 'time-not-rising', 'Row 3'],
    ['whose time runs back', { ...record, time: changed(record.time, 100, -1) }, 'time-not-rising', 'Row 102'],
    [
      'with samples missing',
      {
        time: record.time.toSpliced(500, 20),
        voltage: record.voltage.toSpliced(500, 20),
        current: record.current.toSpliced(500, 20),
        firstRow: 2,
      },
      'time-not-even',
      'Row',
    ],
    ['with columns of different length', { ...record, current: record.current.slice(1) }, 'unreadable-record', 'differ in length'],
    ['with a value that is no number', { ...record, current: changed(record.current, 7, Number.NaN) }, 'unreadable-record', 'Row 9'],
  ])('%s', (_, given, kind, said) => {
    expect(fault(given)).toMatchObject({ kind, detail: expect.stringContaining(said) });
  });

  test('with a current in A where mA was meant even where no rated power is stated', () => {
    expect(fault({ ...record, current: times(record.current, 1000) }, null)).toMatchObject({ kind: 'wrong-units', factor: null });
  });

  test.each<[string, Name, Partial<Scope>, string]>([
    ['voltage', 'emulated', { range: [300, 10] }, 'voltage'],
    ['voltage at eight bits', 'emulated', { range: [300, 10], bits: 8 }, 'voltage'],
    ['current pulse', 'reservoir', { range: [1000, 0.15] }, 'current'],
    ['current pulse without noise', 'reservoir', { range: [1000, 0.15], noise: [0, 0] }, 'current'],
    ['current pulse at eight bits', 'reservoir', { range: [1000, 0.15], noise: [0, 0], bits: 8 }, 'current'],
    ['sine current', 'emulated', { range: [1000, 0.03] }, 'current'],
  ])('with a clipped %s', (_, name, change, column) => {
    expect(fault(recorded(lamps[name].lamp, change))).toMatchObject({ kind: 'clipped', column });
  });
});
