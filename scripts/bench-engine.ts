/**
 * Measures the engine: half-cycles per second on one core for each load kind, as they come and with every walk proven anew, its steps and
 * events, the arithmetic of its steps alone, what building the modes of a new dial position costs, how a sweep grows with lamp groups, and,
 * alternately in the same call, what ngspice makes of the same circuits. Every figure is the median of several runs with its least and most.
 *
 *   npm run bench:engine [-- --runs 5] [--no-ngspice] [--grid]
 *
 * --grid adds a two-way sweep of 21 positions of every circuit of the reference grid. Run it on an otherwise idle machine.
 */
import { parseArgs } from 'node:util';
import { layNetwork } from '../model/circuit/network.ts';
import { ConfigurationMap } from '../model/engine/configuration-map.ts';
import { DimmerRun } from '../model/engine/dimmer-run.ts';
import { WATCHED_STRIDE } from '../model/engine/kernels.ts';
import { LEVELS } from '../model/engine/linear-mode.ts';
import { type Mode, ModeShelf } from '../model/engine/mode.ts';
import type { Pairing } from '../model/index.ts';
import { sweepDial } from '../model/observation/dial-sweep.ts';
import { cases } from '../tests/ngspice/cases.ts';
import { ngspiceVersion, runNgspice } from '../tests/ngspice/run.ts';
import { type BenchCircuit, benchCircuits, groupedPairing } from './bench-circuits.ts';
import { figure, machineLine, type Spread, spreadOf } from './bench-figures.ts';
import { timeNewModes } from './new-mode-timing.ts';

const DIALS = [20, 40, 60, 80, 100];
const POSITIONS = Array.from({ length: 21 }, (_, k) => 5 * k);
/** half-cycles per timed run and dial position, and before timing begins: settled, and compiled */
const TIMED = 4000;
const WARM_UP = 2000;
/** sweeps of every circuit before anything is timed, and runs of one before it is: a new thread compiles for its first second or two, and
 * again where it meets what it has not met for a while */
const WARM_SWEEPS = 6;
const UNTIMED = 4;
const NGSPICE_HALF_CYCLES = 8;
/** modes built per timed run; steps per mode, and guards read in each, where only the arithmetic is timed */
const REBUILT = 20_000;
const STEPPED = 200_000;
const GUARDS = 3;

const { values } = parseArgs({
  options: {
    runs: { type: 'string', default: '5' },
    'no-ngspice': { type: 'boolean', default: false },
    grid: { type: 'boolean', default: false },
  },
});
const runs = Number(values.runs);

const told = (s: Spread): string => `${figure(s.median)} (${figure(s.least)} to ${figure(s.most)})`;

interface EngineRate {
  readonly perSecond: number;
  readonly steps: number;
  readonly events: number;
}

/** One timed run over the dial positions: half-cycles over the time that all of them took together. Setting the dial makes a run forget the walks
 * of the half-cycles before; where it does so before each one, every walk is proven anew. */
function timeEngine(atDials: readonly DimmerRun[], forgetting = false): EngineRate {
  const before = atDials.map((run) => ({ steps: run.steps, events: run.events }));
  const began = performance.now();
  atDials.forEach((run, at) => {
    for (let k = 0; k < TIMED; k++) {
      if (forgetting) run.setDial(DIALS[at] as number);
      run.finishHalfCycle();
    }
  });
  const seconds = (performance.now() - began) / 1000;
  const halfCycles = TIMED * atDials.length;
  const sum = (pick: (run: DimmerRun, k: number) => number): number => atDials.reduce((total, run, k) => total + pick(run, k), 0);
  return {
    perSecond: halfCycles / seconds,
    steps: sum((run, k) => run.steps - (before[k]?.steps ?? 0)) / halfCycles,
    events: sum((run, k) => run.events - (before[k]?.events ?? 0)) / halfCycles,
  };
}

function settledRuns(pairing: Pairing): DimmerRun[] {
  return DIALS.map((dial) => {
    const run = new DimmerRun(layNetwork(pairing), pairing.dimmer);
    run.setDial(dial);
    for (let k = 0; k < WARM_UP; k++) run.finishHalfCycle();
    return run;
  });
}

/** half-cycles per second over the dial positions that ngspice gets through; it gives some up (time step too small) */
async function timeNgspice(pairing: Pairing): Promise<{ readonly perSecond: number; readonly givenUp: readonly number[] }> {
  const givenUp: number[] = [];
  let ms = 0;
  for (const dial of DIALS) {
    const began = performance.now();
    try {
      await runNgspice(pairing, dial, { halfCycles: NGSPICE_HALF_CYCLES });
      ms += performance.now() - began;
    } catch {
      givenUp.push(dial);
    }
  }
  return { perSecond: (NGSPICE_HALF_CYCLES * (DIALS.length - givenUp.length) * 1000) / ms, givenUp };
}

/** the modes that a circuit passes through at half dial */
function metModes(pairing: Pairing, run: DimmerRun): Mode[] {
  const met = new Set<Mode>();
  run.segmentListener = { segment: (mode) => void met.add(mode) };
  run.setDial(pairing.dimmer.drive.kind === 'diac' ? 60 : 50);
  for (let k = 0; k < 20; k++) run.finishHalfCycle();
  run.segmentListener = null;
  return [...met];
}

/** builds at another dial position a mode that was met, the ways out of it that were taken, and what lies beyond them */
function buildAnew(shelf: ModeShelf, met: Mode, made: Mode, known: Set<Mode>): void {
  known.add(met);
  met.passages.forEach((passage, way) => {
    if (passage === undefined) return;
    const { to } = shelf.passage(made, way);
    if (!known.has(passage.to)) buildAnew(shelf, passage.to, to, known);
  });
}

/** microseconds to build what a new dial position needs, per linear mode: its decomposition, its mirrored forms, the ways between them */
function timeRebuild(pairing: Pairing): number {
  const network = layNetwork(pairing);
  const met = metModes(pairing, new DimmerRun(network, pairing.dimmer));
  const map = new ConfigurationMap(network, pairing.dimmer);
  const repeats = Math.ceil(REBUILT / met.length);
  const start = met[0] as Mode;
  let built = 0;
  const began = performance.now();
  for (let k = 0; k < repeats; k++) {
    const shelf = new ModeShelf(network, map, 50e3 + k);
    buildAnew(shelf, start, shelf.mode(start.configuration), new Set());
    built += shelf.built;
  }
  return ((performance.now() - began) * 1000) / built;
}

/** nanoseconds of one step's arithmetic alone, over those modes: coordinates moved on, GUARDS outputs read */
function timeArithmetic(pairing: Pairing): number {
  const met = metModes(pairing, new DimmerRun(layNetwork(pairing), pairing.dimmer));
  const watched = new Float64Array(GUARDS * WATCHED_STRIDE);
  const began = performance.now();
  for (const { linear } of met) {
    const rows = Int32Array.from({ length: GUARDS }, (_, k) => k * linear.outputStride);
    const z = new Float64Array(linear.coordinates).fill(0.5);
    const next = new Float64Array(linear.coordinates);
    for (let k = 0; k < STEPPED; k++) {
      linear.kernels.step(z, next, linear.factors, (k % LEVELS) * linear.coordinates, linear.outputRows, watched, rows, GUARDS);
    }
  }
  return ((performance.now() - began) * 1e6) / (met.length * STEPPED);
}

function timeSweep(pairing: Pairing): { readonly ms: number; readonly modesBuilt: number; readonly halfCycles: number } {
  const began = performance.now();
  const { counters } = sweepDial(pairing, POSITIONS);
  return { ms: performance.now() - began, modesBuilt: counters.modesBuilt, halfCycles: counters.halfCycles };
}

/** share of a sweep that building its modes takes, % */
function newModesShare(pairing: Pairing): number {
  const began = performance.now();
  const building = timeNewModes(() => sweepDial(pairing, POSITIONS));
  return (100 * building) / (performance.now() - began);
}

interface CircuitFigures {
  /** half-cycles per second, as they come and with every walk proven anew */
  readonly engine: number;
  readonly anew: number;
  /** times ngspice's rate */
  readonly ratio: number | null;
  /** ms, and the share of it that new modes take, % */
  readonly sweep: number;
  readonly newModes: number;
}

async function benchCircuit(circuit: BenchCircuit, withNgspice: boolean): Promise<CircuitFigures> {
  const atDials = settledRuns(circuit.pairing);
  const engine: EngineRate[] = [];
  const anew: EngineRate[] = [];
  const ngspice: number[] = [];
  let givenUp: readonly number[] = [];
  for (let r = 0; r < runs; r++) {
    engine.push(timeEngine(atDials));
    anew.push(timeEngine(atDials, true));
    // ngspice is timed three times at most: it takes seconds
    if (!withNgspice || r >= 3 || givenUp.length === DIALS.length) continue;
    const timed = await timeNgspice(circuit.pairing);
    givenUp = timed.givenUp;
    if (givenUp.length < DIALS.length) ngspice.push(timed.perSecond);
  }
  const sweeps = Array.from({ length: runs + UNTIMED }, () => timeSweep(circuit.pairing)).slice(UNTIMED);
  const rebuild = Array.from({ length: runs + UNTIMED }, () => timeRebuild(circuit.pairing)).slice(UNTIMED);
  const rate = spreadOf(engine.map((e) => e.perSecond));
  const fromNothing = spreadOf(anew.map((e) => e.perSecond));
  const sweep = spreadOf(sweeps.map((s) => s.ms));
  const perMode = spreadOf(rebuild);
  const share = spreadOf(Array.from({ length: runs + UNTIMED }, () => newModesShare(circuit.pairing)).slice(UNTIMED));
  const arithmetic = spreadOf(Array.from({ length: runs }, () => timeArithmetic(circuit.pairing)));
  const floor = 1e9 / (arithmetic.median * (anew[0]?.steps ?? 1));
  console.log(`${circuit.kind}: ${circuit.name}`);
  console.log(`  engine     ${told(rate)} half-cycles/s, ${figure(engine[0]?.events ?? 0)} events each`);
  console.log(`  every walk proven anew: ${told(fromNothing)} half-cycles/s, ${figure(anew[0]?.steps ?? 0)} steps each`);
  console.log(`  arithmetic ${told(arithmetic)} ns a step: ${figure(floor)} half-cycles/s if it were all`);
  console.log(`  sweep      ${told(sweep)} ms for 21 positions up and down, ${sweeps[0]?.halfCycles} half-cycles`);
  console.log(`  new modes  ${told(perMode)} us each, ${sweeps[0]?.modesBuilt} in a sweep: ${told(share)} % of it`);
  const reference = ngspice.length === 0 ? null : spreadOf(ngspice);
  if (reference !== null) {
    console.log(`  ngspice    ${told(reference)} half-cycles/s: the engine is ${figure(rate.median / reference.median)} times as fast`);
  }
  if (givenUp.length > 0) console.log(`             ngspice gave up at ${givenUp.join(', ')} % of the dial; its rate is over the others`);
  return {
    engine: rate.median,
    anew: fromNothing.median,
    ratio: reference === null ? null : rate.median / reference.median,
    sweep: sweep.median,
    newModes: share.median,
  };
}

function benchGroups(): void {
  console.log('growth with different lamp groups (sweep of 21 positions, ms):');
  for (let groups = 1; groups <= 6; groups++) {
    const pairing = groupedPairing(groups);
    const times = Array.from({ length: runs + 1 }, () => timeSweep(pairing)).slice(1);
    console.log(`  ${groups}: ${told(spreadOf(times.map((t) => t.ms)))}, ${times[0]?.halfCycles} half-cycles`);
  }
}

/** every circuit in turn, the first round to warm up: as in a thread that has judged for a while, and not one circuit over and over */
function benchGrid(): void {
  const rounds = Array.from({ length: runs + 1 }, () => cases.map((c) => timeSweep(c.pairing).ms)).slice(1);
  const times = cases.map((_, k) => spreadOf(rounds.map((round) => round[k] as number)).median);
  console.log(`reference grid, ${cases.length} circuits: a sweep of 21 positions takes ${told(spreadOf(times))} ms`);
}

console.log(machineLine());
const version = values['no-ngspice'] ? null : ngspiceVersion();
if (version === null && !values['no-ngspice']) console.log('ngspice is not installed: engine alone');
for (const { pairing } of benchCircuits()) for (let k = 0; k < WARM_SWEEPS; k++) timeSweep(pairing);
const results: CircuitFigures[] = [];
for (const circuit of benchCircuits()) results.push(await benchCircuit(circuit, version !== null));
console.log(`over ${results.length} circuits: ${told(spreadOf(results.map((r) => r.engine)))} half-cycles/s`);
const ratios = results.map((r) => r.ratio).filter((r) => r !== null);
if (ratios.length > 0) console.log(`  against ${version}: ${told(spreadOf(ratios))} times as fast`);
console.log(`  every walk proven anew: ${told(spreadOf(results.map((r) => r.anew)))} half-cycles/s`);
console.log(
  `  sweep: ${told(spreadOf(results.map((r) => r.sweep)))} ms, new modes ${told(spreadOf(results.map((r) => r.newModes)))} % of it`,
);
benchGroups();
if (values.grid) benchGrid();
