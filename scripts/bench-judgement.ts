/**
 * Measures what one pairing costs to judge at all corners (two-way sweep of 21 positions), and its requirement boundary: time as the
 * median of several runs with their spread, and the half-cycles that early endings spared, measured by running without them.
 *
 *   npm run bench:judgement [-- runs]
 */
import { cpus } from 'node:os';
import { type Effort, type JudgeOptions, judgePairing, type Outcome, type Pairing, requirementBoundary } from '../model/index.ts';

const both = (value: number) => ({ positive: value, negative: value });

/** Two 8 W lamps that draw like resistors behind 47 nF, on an everyday rotary dimmer; generic values, nobody's product. */
const PAIRING: Pairing = {
  mains: { voltage: 230, frequency: 50, sourceResistance: 0.5 },
  dimmer: {
    latchingCurrent: both(0.04),
    holdingCurrent: both(0.022),
    typicalLatchingCurrent: both(0.025),
    typicalHoldingCurrent: both(0.014),
    turnOffTime: 15e-6,
    onVoltage: 1,
    onResistance: 0.05,
    wiring: 'two-wire',
    choke: { inductance: 0.1e-3, resistance: 0.2, lossResistance: 1000 },
    snubber: { resistance: 100, capacitance: 33e-9 },
    interferenceCapacitance: 0,
    ratings: { maximumCurrent: null, maximumPeakCurrent: null, minimumLoad: null, maximumLoad: null },
    drive: {
      kind: 'diac',
      fixedResistance: 6.8e3,
      potentiometer: 330e3,
      capacitance: 100e-9,
      breakover: both(32),
      residualVoltage: 12,
      diacResistance: 10,
      diacHoldingCurrent: 5e-3,
      gateResistance: 100,
      gateVoltage: 0.9,
      gateThreshold: 15e-3,
      secondSection: null,
    },
  },
  lamps: [
    {
      count: 2,
      lamp: {
        ratedPower: 8,
        input: {
          seriesResistance: 22,
          seriesCapacitance: 0,
          inductance: 0,
          inductorLoss: null,
          capacitance: 47e-9,
          damper: null,
          bleeder: null,
        },
        load: {
          kind: 'iv-table',
          points: [
            { voltage: 20, current: 0.003 },
            { voltage: 325, current: 0.0492 },
          ],
        },
      },
    },
  ],
  addedLoad: null,
};

/** a converter's lamps on the same dimmer, where the grade is decided early */
const UNSUITABLE: Pairing = {
  ...PAIRING,
  lamps: [
    {
      count: 2,
      lamp: {
        ratedPower: 8,
        input: {
          seriesResistance: 22,
          seriesCapacitance: 0,
          inductance: 0,
          inductorLoss: null,
          capacitance: 22e-9,
          damper: null,
          bleeder: null,
        },
        load: {
          kind: 'reservoir',
          capacitance: 4.7e-6,
          surgeResistance: 1,
          drain: { kind: 'power', power: 8 },
          minimumVoltage: 50,
        },
      },
    },
  ],
};

const OPTIONS: JudgeOptions = { dialPositions: Array.from({ length: 21 }, (_, k) => 5 * k), corners: 'all', dropOutAngle: 30 };

interface Case {
  readonly name: string;
  readonly run: (options: JudgeOptions) => Outcome<{ readonly counters: Effort }>;
}

const CASES: readonly Case[] = [
  { name: 'nominal corner, resistor-like lamps', run: (o) => judgePairing(PAIRING, { ...o, corners: 'nominal' }) },
  { name: 'all corners, resistor-like lamps', run: (o) => judgePairing(PAIRING, o) },
  { name: 'all corners, reservoir lamps', run: (o) => judgePairing(UNSUITABLE, o) },
  { name: 'requirement, resistor-like lamps', run: (o) => requirementBoundary(PAIRING, o) },
];

function effortOf({ run, name }: Case, options: JudgeOptions): Effort {
  const outcome = run(options);
  if (!outcome.ok) throw new Error(`${name}: ${JSON.stringify(outcome.failure)}`);
  return outcome.value.counters;
}

function quantile(sorted: readonly number[], share: number): number {
  return sorted[Math.round(share * (sorted.length - 1))] ?? Number.NaN;
}

const runs = Number(process.argv[2] ?? 5);
if (!(Number.isInteger(runs) && runs >= 1)) {
  process.stderr.write('The number of runs must be a whole number, 1 or more.\n');
  process.exit(2);
}

const [cpu] = cpus();
process.stdout.write(`${cpu?.model.trim() ?? 'unknown processor'}, ${cpus().length} cores; Node ${process.version}; ${runs} runs each\n\n`);
for (const one of CASES) {
  // the first run compiles; it is not counted
  const effort = effortOf(one, OPTIONS);
  const whole = effortOf(one, { ...OPTIONS, thorough: true });
  const times = Array.from({ length: runs }, () => {
    const start = performance.now();
    effortOf(one, OPTIONS);
    return performance.now() - start;
  }).sort((a, b) => a - b);
  const ms = (value: number): string => value.toFixed(value < 100 ? 1 : 0);
  const perSecond = effort.halfCycles / (quantile(times, 0.5) / 1000);
  const spared = whole.halfCycles - effort.halfCycles;
  process.stdout.write(
    `${one.name}\n` +
      `  median ${ms(quantile(times, 0.5))} ms (fastest ${ms(quantile(times, 0))}, slowest ${ms(quantile(times, 1))}); ${Math.round(perSecond)} half-cycles/s\n` +
      `  ${effort.halfCycles} half-cycles simulated at ${effort.stops} stops; early endings spared ${spared} of ${whole.halfCycles} (${Math.round((100 * spared) / whole.halfCycles)} %)\n`,
  );
}
