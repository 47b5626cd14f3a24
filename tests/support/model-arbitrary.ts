/**
 * Valid pairings for property tests: every load kind, drive, wiring, one or two timing sections, bleeders, dampers, chokes, snubbers,
 * unequal polarities and every part that may be absent. HOLDFAST_RUNS raises the number of circuits tried (200 stands for the ordinary
 * run), HOLDFAST_SEED picks other ones, HOLDFAST_SHRINK makes a failing one smaller (minutes); the ordinary run is always the same.
 */
import fc from 'fast-check';
import type {
  AddedLoad,
  Bleeder,
  DiacDrive,
  Dimmer,
  Lamp,
  LampGroup,
  LampInput,
  Load,
  Mains,
  Pairing,
  PerPolarity,
  SeriesRC,
  TimedDrive,
} from '../../model/pairing.ts';
import { both } from './model-pairings.ts';

const STEPS = 1000;
const ORDINARY_RUNS = 200;

const wantedRuns = (): number => Number(process.env.HOLDFAST_RUNS ?? ORDINARY_RUNS);

/** ms after which a property is given up */
export const PATIENCE = 120_000 * Math.max(1, wantedRuns() / ORDINARY_RUNS);

/** parameters of a property that tries `ordinary` circuits in the ordinary run */
export function runsOf(ordinary: number): { numRuns: number; seed: number; endOnFailure: boolean } {
  return {
    numRuns: Math.max(1, Math.round((ordinary * wantedRuns()) / ORDINARY_RUNS)),
    seed: Number(process.env.HOLDFAST_SEED ?? 1),
    endOnFailure: process.env.HOLDFAST_SHRINK === undefined,
  };
}

const linear = (from: number, to: number): fc.Arbitrary<number> =>
  fc.integer({ min: 0, max: STEPS }).map((k) => from + ((to - from) * k) / STEPS);

/** even in its logarithm, rounded to four digits as a person would give it */
const logarithmic = (from: number, to: number): fc.Arbitrary<number> =>
  fc.integer({ min: 0, max: STEPS }).map((k) => Number((from * (to / from) ** (k / STEPS)).toPrecision(4)));

/** plain objects, as a parsed pairing holds them */
const record = <T>(model: { [K in keyof T]: fc.Arbitrary<T[K]> }): fc.Arbitrary<T> =>
  fc.record(model, { noNullPrototype: true }) as fc.Arbitrary<T>;

const orZero = (value: fc.Arbitrary<number>): fc.Arbitrary<number> => fc.oneof(fc.constant(0), value);
const orNull = <T>(value: fc.Arbitrary<T>): fc.Arbitrary<T | null> => fc.oneof(fc.constant(null), value);

const series = (resistance: fc.Arbitrary<number>, capacitance: fc.Arbitrary<number>): fc.Arbitrary<SeriesRC> =>
  record({ resistance, capacitance });

const perPolarity = (value: fc.Arbitrary<number>): fc.Arbitrary<PerPolarity> =>
  fc.oneof(
    { weight: 3, arbitrary: value.map(both) },
    { weight: 1, arbitrary: fc.tuple(value, linear(0.9, 1.1)).map(([v, ratio]) => ({ positive: v, negative: v * ratio })) },
  );

const mains: fc.Arbitrary<Mains> = record({
  voltage: fc.oneof(fc.constantFrom(120, 230), linear(100, 253)),
  frequency: fc.constantFrom(50, 60),
  sourceResistance: logarithmic(0.05, 3),
});

const diacDrives: fc.Arbitrary<DiacDrive> = record({
  kind: fc.constant('diac' as const),
  fixedResistance: logarithmic(1e3, 22e3),
  potentiometer: orZero(logarithmic(47e3, 680e3)),
  capacitance: logarithmic(33e-9, 220e-9),
  breakover: perPolarity(linear(28, 36)),
  residualVoltage: linear(0, 22),
  diacResistance: logarithmic(1, 50),
  diacHoldingCurrent: logarithmic(0.5e-3, 20e-3),
  gateResistance: logarithmic(10, 330),
  gateVoltage: orZero(linear(0.6, 1.2)),
  gateThreshold: logarithmic(3e-3, 40e-3),
  secondSection: orNull(series(logarithmic(4.7e3, 100e3), logarithmic(10e-9, 100e-9))),
});

const timedDrives: fc.Arbitrary<TimedDrive> = fc
  .record({
    kind: fc.constant('timed' as const),
    firingAngleFull: linear(0, 60),
    firingAngleLow: linear(90, 175),
    gatePulse: logarithmic(5e-6, 1e-3),
    pulses: fc.constantFrom('single' as const, 'train' as const, 'held' as const),
    pulseSpacing: linear(1.1, 10),
  })
  .map((drive) => ({ ...drive, pulseSpacing: drive.gatePulse * drive.pulseSpacing }));

const dimmers: fc.Arbitrary<Dimmer> = fc
  .record({
    latchingCurrent: perPolarity(logarithmic(5e-3, 100e-3)),
    holdingShare: linear(0.3, 1),
    turnOffTime: fc.oneof(fc.constantFrom(0, 15e-6), logarithmic(1e-6, 60e-6)),
    onVoltage: orZero(linear(0.6, 1.5)),
    onResistance: logarithmic(0.01, 0.5),
    wiring: fc.constantFrom('two-wire' as const, 'three-wire' as const),
    choke: record({
      inductance: orZero(logarithmic(20e-6, 5e-3)),
      resistance: logarithmic(0.02, 5),
      lossResistance: orNull(logarithmic(200, 20e3)),
    }),
    snubber: orNull(series(logarithmic(10, 1000), orZero(logarithmic(1e-9, 150e-9)))),
    interferenceCapacitance: orZero(logarithmic(1e-9, 220e-9)),
    drive: fc.oneof({ weight: 2, arbitrary: diacDrives }, { weight: 1, arbitrary: timedDrives }) as fc.Arbitrary<Dimmer['drive']>,
  })
  .map(({ holdingShare, ...rest }) => ({
    ...rest,
    holdingCurrent: {
      positive: holdingShare * rest.latchingCurrent.positive,
      negative: holdingShare * rest.latchingCurrent.negative,
    },
    typicalLatchingCurrent: null,
    typicalHoldingCurrent: null,
    ratings: { maximumCurrent: null, maximumPeakCurrent: null, minimumLoad: null, maximumLoad: null },
  }));

const bleeders: fc.Arbitrary<Bleeder> = fc.oneof(
  record({ kind: fc.constant('resistor' as const), resistance: logarithmic(2.2e3, 470e3) }),
  record({
    kind: fc.constant('resistor-capacitor' as const),
    resistance: logarithmic(47, 2.2e3),
    capacitance: orZero(logarithmic(10e-9, 470e-9)),
  }),
  record({ kind: fc.constant('active' as const), current: logarithmic(5e-3, 80e-3), below: linear(3, 200) }),
);

const inputs: fc.Arbitrary<LampInput> = record({
  seriesResistance: logarithmic(0.1, 220),
  seriesCapacitance: fc.oneof({ weight: 5, arbitrary: fc.constant(0) }, { weight: 1, arbitrary: logarithmic(0.22e-6, 4.7e-6) }),
  inductance: orZero(logarithmic(0.1e-3, 10e-3)),
  inductorLoss: orNull(logarithmic(1e3, 50e3)),
  capacitance: orZero(logarithmic(1e-9, 470e-9)),
  damper: orNull(series(logarithmic(47, 1e3), orZero(logarithmic(10e-9, 470e-9)))),
  bleeder: orNull(bleeders),
});

const tables: fc.Arbitrary<Load> = fc
  .array(record({ rise: logarithmic(2, 80), current: orZero(logarithmic(1e-3, 150e-3)) }), { minLength: 2, maxLength: 12 })
  .chain((steps) =>
    fc.boolean().map((fromZero) => {
      let voltage = 0;
      const points = steps.map(({ rise, current }, k) => {
        if (k > 0 || !fromZero) voltage += rise;
        return { voltage, current };
      });
      return { kind: 'iv-table' as const, points };
    }),
  );

const loads: fc.Arbitrary<Load> = fc.oneof(
  record({ kind: fc.constant('resistive' as const), resistance: logarithmic(100, 50e3) }),
  tables,
  record({
    kind: fc.constant('reservoir' as const),
    capacitance: logarithmic(0.5e-6, 47e-6),
    surgeResistance: logarithmic(0.5, 47),
    drain: fc.oneof(
      record({ kind: fc.constant('power' as const), power: logarithmic(1, 25) }),
      record({ kind: fc.constant('current' as const), current: logarithmic(3e-3, 150e-3) }),
    ),
    minimumVoltage: linear(10, 150),
  }),
);

const lamps: fc.Arbitrary<Lamp> = record({ ratedPower: fc.constant(null), input: inputs, load: loads });

/**
 * As lamps are built: what draws through a bridge has some ohms before it; an input inductor has a core that loses something; and behind
 * an inductor, before an active bleeder and before anything whose current falls with the voltage stands a film capacitor. Without these
 * a valid lamp can be an oscillator of some megahertz (a falling curve on its stray capacitance), which no event budget follows.
 */
function asBuilt(lamp: Lamp): Lamp {
  const { input, load } = lamp;
  const active = input.bleeder?.kind === 'active';
  const bridged = load.kind !== 'resistive' || active;
  const falls = load.kind === 'iv-table' && load.points.some((p, k) => p.current < (load.points[k - 1]?.current ?? 0));
  const filmed = active || falls || (input.inductance > 0 && bridged);
  return {
    ...lamp,
    input: {
      ...input,
      seriesResistance: bridged ? Math.max(input.seriesResistance, 4.7) : input.seriesResistance,
      inductorLoss: input.inductance > 0 ? (input.inductorLoss ?? 5e3) : input.inductorLoss,
      capacitance: filmed ? Math.max(input.capacitance, 10e-9) : input.capacitance,
    },
  };
}

const groupsOf = (lamp: fc.Arbitrary<Lamp>): fc.Arbitrary<LampGroup> => record({ count: fc.integer({ min: 1, max: 12 }), lamp });

const addedLoads: fc.Arbitrary<AddedLoad> = fc.oneof(
  record({ kind: fc.constant('resistor' as const), resistance: logarithmic(1e3, 100e3) }),
  record({
    kind: fc.constant('resistor-capacitor' as const),
    resistance: logarithmic(22, 1e3),
    capacitance: orZero(logarithmic(10e-9, 470e-9)),
  }),
);

const pairingsOf = (lamp: fc.Arbitrary<Lamp>): fc.Arbitrary<Pairing> =>
  record({
    mains,
    dimmer: dimmers,
    lamps: fc.array(groupsOf(lamp), { minLength: 1, maxLength: 3 }),
    addedLoad: fc.oneof(
      { weight: 3, arbitrary: fc.constant(null) },
      { weight: 1, arbitrary: addedLoads as fc.Arbitrary<AddedLoad | null> },
    ),
  });

/** the pairing with a diac that holds on at this share of the current that flows when it breaks over, or less */
function holdingAt(share: number): (pairing: Pairing) => Pairing {
  return (pairing) => {
    const { drive } = pairing.dimmer;
    if (drive.kind === 'timed') return pairing;
    const { residualVoltage, gateVoltage, breakover, diacResistance, gateResistance } = drive;
    const fall = Math.min(breakover.positive, breakover.negative) - residualVoltage - gateVoltage;
    const most = (share * fall) / (diacResistance + gateResistance);
    const held = { ...drive, diacHoldingCurrent: Math.min(drive.diacHoldingCurrent, most) };
    return { ...pairing, dimmer: { ...pairing.dimmer, drive: held } };
  };
}

/** whatever the checks let pass */
export const validPairings = pairingsOf(lamps).map(holdingAt(0.99));
/** of lamps as they are built, on a dimmer whose diac carries its holding current with something to spare */
export const builtPairings = pairingsOf(lamps.map(asBuilt)).map(holdingAt(0.7));

export const dialPositions: fc.Arbitrary<number> = fc.integer({ min: 0, max: 100 });
