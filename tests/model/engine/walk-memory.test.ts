/**
 * A remembered walk, taken again from elsewhere, held against the closed form: modes and windows are drawn at random, and the second walk begins
 * as far from the first as the first one's spares just allow. All along it no output may be outside its window by more than a hair (two
 * slacks), and the crossing that it ends with must lie on the bound.
 */
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { WINDOW_LOWER, WINDOW_REST, WINDOW_SLACK, WINDOW_STRIDE, WINDOW_UPPER } from '../../../model/engine/kernels.ts';
import { linearMode } from '../../../model/engine/linear-mode.ts';
import { type Mode, watchOutput } from '../../../model/engine/mode.ts';
import { ModeWalk, type WalkOutcome } from '../../../model/engine/mode-walk.ts';
import { WalkMemory } from '../../../model/engine/walk-memory.ts';
import { GUARD_SLACK, LADDER_LEVELS, REMEMBERED_WALKS, ROOT_SHARE } from '../../../model/tolerances.ts';
import { PATIENCE, runsOf } from '../../support/model-arbitrary.ts';

const OMEGA = 100 * Math.PI;
const HALF_PERIOD = Math.PI / OMEGA;
const SHORTEST = HALF_PERIOD / 2 ** LADDER_LEVELS;
const BUDGET = 200_000;
const SAMPLES = 60;
/** of outputs of some units' size */
const ROUNDING = 1e-12;

interface Window {
  readonly output: number;
  /** how far inside either bound the first walk begins; infinite for no bound */
  readonly below: number;
  readonly above: number;
}

interface Case {
  /** 1/s: decays (a growth is positive), and decays with rotations */
  readonly reals: readonly number[];
  readonly pairs: readonly (readonly [number, number])[];
  /** numbers between -1 and 1 that outputs, mains, constant and start are filled from */
  readonly shares: readonly number[];
  readonly windows: readonly Window[];
  readonly end: number;
  /** end of the second walk, as a multiple; null for the moment of the first one's crossing */
  readonly secondEnd: number | null;
  /** the guard whose output the differences are made for: to add up, or to leave it where it is at the start; -1 for any differences */
  readonly aimed: number;
  readonly towards: 1 | 0 | -1;
}

const OUTPUTS = 3;

/** even, without fast-check's liking for extremes */
const even = fc.noBias(fc.integer({ min: 0, max: 1e6 })).map((k) => k / 1e6);
const signed = even.map((x) => 2 * x - 1);
const logarithmic = (from: number, to: number): fc.Arbitrary<number> => even.map((x) => from * (to / from) ** x);
const decays = fc.oneof({ weight: 5, arbitrary: logarithmic(1, 3e6).map((x) => -x) }, { weight: 2, arbitrary: logarithmic(30, 3000) });
/** from a bound: on it but for rounding, near it, anywhere */
const distances = fc.oneof(
  { weight: 2, arbitrary: signed.map((x) => 0.9 * x * GUARD_SLACK) },
  { weight: 4, arbitrary: logarithmic(1e-4, 3) },
  { weight: 1, arbitrary: fc.constant(Number.POSITIVE_INFINITY) },
);

const cases: fc.Arbitrary<Case> = fc.record({
  reals: fc.array(decays, { minLength: 1, maxLength: 3 }),
  pairs: fc.array(
    fc.tuple(
      fc.oneof(
        decays,
        logarithmic(10, 3000).map((x) => -x),
      ),
      logarithmic(300, 3e5),
    ),
    { maxLength: 2 },
  ),
  shares: fc.array(signed, { minLength: 60, maxLength: 60 }),
  windows: fc
    .array(fc.record({ output: fc.integer({ min: 0, max: OUTPUTS - 1 }), below: distances, above: distances }), {
      minLength: 1,
      maxLength: 4,
    })
    // two guards that leave at about the same time
    .chain((windows) =>
      fc.tuple(fc.boolean(), logarithmic(1e-7, 0.3)).map(([twice, by]) => {
        const first = windows[0] as Window;
        return twice ? [...windows, { ...first, below: first.below * (1 + by), above: first.above * (1 + by) }] : windows;
      }),
    ),
  end: logarithmic(1e-4, HALF_PERIOD),
  secondEnd: fc.oneof(logarithmic(0.2, 5), fc.constant(null)),
  aimed: fc.integer({ min: -1, max: 1 }),
  towards: fc.constantFrom(1 as const, 0 as const, -1 as const),
});

interface Start {
  readonly x: Float64Array;
  readonly angle: number;
}

/** a mode with those eigenvalues, its windows around where the start puts its outputs */
function modeOf({ reals, pairs, shares, windows }: Case): { mode: Mode; start: Start } {
  const n = reals.length + 2 * pairs.length;
  const columns = n + 2;
  const rows = new Float64Array((n + OUTPUTS) * columns);
  let next = 0;
  const share = (): number => shares[next++ % shares.length] as number;
  reals.forEach((decay, k) => {
    rows[k * columns + k] = decay;
  });
  pairs.forEach(([decay, rotation], p) => {
    const k = reals.length + 2 * p;
    rows[k * columns + k] = decay;
    rows[(k + 1) * columns + k + 1] = decay;
    rows[k * columns + k + 1] = -rotation;
    rows[(k + 1) * columns + k] = rotation;
  });
  for (let r = 0; r < n; r++) {
    rows[r * columns + n] = 300 * share();
    rows[r * columns + n + 1] = 300 * share();
  }
  for (let r = n; r < n + OUTPUTS; r++) for (let c = 0; c < columns; c++) rows[r * columns + c] = share();
  const linear = linearMode({ states: n, outputs: OUTPUTS, constants: 1, columns, rows }, OMEGA, SHORTEST);
  const mode = {
    linear,
    rest: linear.constantAnswers,
    windows: { rows: new Int32Array(windows.length), records: new Float64Array(windows.length * WINDOW_STRIDE) },
    guardCount: windows.length,
    startLevel: 6,
  } as unknown as Mode;
  const angle = Math.PI * share();
  const { drive, constantAnswers } = linear;
  // what has faded nearly out may come again in the second walk
  const faded = (): number => share() * 1e-4 ** Math.abs(share());
  const x = Float64Array.from({ length: n }, (_, k) => {
    const settled = (constantAnswers[k] as number) + Math.cos(angle) * (drive[k] as number) + Math.sin(angle) * (drive[n + k] as number);
    return settled + faded();
  });
  const start = { x, angle };
  const walk = new ModeWalk(SHORTEST, n, windows.length);
  walk.enter(mode, start.x, Math.cos(start.angle), Math.sin(start.angle));
  windows.forEach(({ output, below, above }, g) => {
    const y = walk.value(output);
    watchOutput(mode, g, output, y - below, y + above);
    mode.windows.records[g * WINDOW_STRIDE + WINDOW_SLACK] = GUARD_SLACK;
  });
  return { mode, start };
}

/** begins a visit and walks; null where a guard is outside from the start */
function take(walk: ModeWalk, mode: Mode, { x, angle }: Start, end: number, budget = BUDGET): WalkOutcome | null {
  walk.enter(mode, x, Math.cos(angle), Math.sin(angle));
  return walk.begin(mode.guardCount, 0) ? walk.walk(end, budget) : null;
}

/** the same without a step to spend: null where it is not a remembered walk taken again */
function retake(walk: ModeWalk, mode: Mode, start: Start, end: number): WalkOutcome | null {
  const outcome = take(walk, mode, start, end, 0);
  return outcome === 'reached' || (outcome === 'crossed' && walk.elapsed > 0) ? outcome : null;
}

interface Again {
  readonly walk: ModeWalk;
  readonly outcome: WalkOutcome;
  readonly end: number;
}

/** what a walk did that began elsewhere than the remembered one; null where it was not the remembered one taken again */
function takenAgain({ end, secondEnd }: Case, mode: Mode, first: Start, second: Start): Again | null {
  const walk = new ModeWalk(SHORTEST, first.x.length, mode.guardCount);
  take(walk, mode, first, end);
  const until = secondEnd === null ? walk.elapsed : secondEnd * end;
  const outcome = retake(walk, mode, second, until);
  return outcome === null ? null : { walk, outcome, end: until };
}

/** output of a guard less its constant part, that long after those coordinates */
function outputAfter({ linear, windows }: Mode, z: Float64Array, g: number, time: number): number {
  const moved = new Float64Array(linear.coordinates);
  const there = new Float64Array(linear.coordinates);
  const at = new Float64Array(2);
  linear.kernels.factorsAfter(moved, linear.decay, linear.rotation, time);
  linear.kernels.move(there, z, moved, 0);
  linear.kernels.value(at, there, linear.outputRows, windows.rows[g] as number);
  return (at[0] as number) + (windows.records[g * WINDOW_STRIDE + WINDOW_REST] as number);
}

/** largest excess of any output over its window up to a time, sampled evenly and towards both ends */
function worstExcess(mode: Mode, z: Float64Array, duration: number): number {
  let worst = 0;
  for (let k = 0; k <= SAMPLES; k++) {
    const share = k / SAMPLES;
    for (const time of [share * duration, duration * 1e-6 ** share, duration * (1 - 1e-6 ** share)]) {
      for (let g = 0; g < mode.guardCount; g++) {
        const y = outputAfter(mode, z, g, time);
        const lower = mode.windows.records[g * WINDOW_STRIDE + WINDOW_LOWER] as number;
        const upper = mode.windows.records[g * WINDOW_STRIDE + WINDOW_UPPER] as number;
        worst = Math.max(worst, lower - y, y - upper);
      }
    }
  }
  return worst;
}

/** the start moved by so much of the case's direction */
function moved({ shares, aimed, towards }: Case, mode: Mode, { x, angle }: Start, by: number): Start {
  const n = x.length;
  const { linear, windows } = mode;
  const { reals, basis } = linear.modal;
  const isAimed = aimed >= 0 && aimed < mode.guardCount;
  const z = Float64Array.from({ length: n }, (_, k) => shares[k] as number);
  if (isAimed) {
    const row = windows.rows[aimed] as number;
    const places = z.map((_, k) => (k < reals ? k : reals + 3 * Math.floor((k - reals) / 2) + ((k - reals) % 2)));
    const own = places.map((place) => linear.outputRows[row + place] as number);
    const alongside = own.reduce((sum, share, k) => sum + share * (z[k] as number), 0) / own.reduce((sum, share) => sum + share * share, 0);
    own.forEach((share, k) => {
      if (towards === 0) z[k] = (z[k] as number) - alongside * share;
      else z[k] = towards * Math.sign(share) * Math.abs(z[k] as number);
    });
  }
  const there = Float64Array.from(x, (old, r) => z.reduce((sum, value, c) => sum + by * (basis[r * n + c] as number) * value, old));
  return { x: there, angle: isAimed ? angle : angle + by * (shares[n] as number) };
}

test('a walk taken again keeps every output within its window up to the first crossing, however far from the remembered one it may begin', {
  timeout: PATIENCE,
}, () => {
  const counts = { cases: 0, takenAgain: 0, crossed: 0, worst: 0, offBound: 0 };
  fc.assert(
    fc.property(cases, (of) => {
      const { mode, start } = modeOf(of);
      counts.cases++;
      const check = (by: number): boolean => {
        const again = takenAgain(of, mode, start, moved(of, mode, start, by));
        if (again === null) return false;
        const { walk, outcome, end } = again;
        counts.takenAgain++;
        const z = new Float64Array(mode.linear.coordinates);
        walk.startCoordinates(z);
        const excess = worstExcess(mode, z, walk.elapsed);
        counts.worst = Math.max(counts.worst, excess);
        expect(excess).toBeLessThan(2 * GUARD_SLACK + ROUNDING);
        if (outcome === 'crossed') {
          counts.crossed++;
          expect(walk.elapsed).toBeLessThan(end);
          const bound = mode.windows.records[
            walk.crossedGuard * WINDOW_STRIDE + (walk.crossedSide === 0 ? WINDOW_LOWER : WINDOW_UPPER)
          ] as number;
          const off = Math.abs(outputAfter(mode, z, walk.crossedGuard, walk.elapsed) - bound);
          counts.offBound = Math.max(counts.offBound, off);
          expect(off).toBeLessThan(ROOT_SHARE * GUARD_SLACK + ROUNDING);
        } else expect(walk.elapsed).toBe(end);
        return true;
      };
      // the farthest that is still taken again, in both directions
      for (const sign of [1, -1]) {
        let near = 0;
        let far = 0;
        for (let by = 16; by > 1e-9 && near === 0; by /= 4) {
          if (check(sign * by)) near = by;
          else far = by;
        }
        if (near === 0) continue;
        for (let k = 0; k < 5 && far > 0; k++) {
          const by = (near + far) / 2;
          if (check(sign * by)) near = by;
          else far = by;
        }
        check(sign * near * 0.7);
      }
    }),
    runsOf(2000),
  );
  console.info('walks taken again', counts);
  expect(counts.takenAgain).toBeGreaterThan(counts.cases);
  expect(counts.crossed).toBeGreaterThan(counts.takenAgain / 4);
});

/** a mode's very first step */
const FIRST_STEP = SHORTEST * 2 ** 6;

test('a slope is not relied on where the difference between the walks can turn it round', () => {
  // the output rises (or falls) by 100 a second from a bound, or towards one; a swing may be added that turns by up to 2.8 in the first step
  const slow = 100;
  const rotation = 2.8 / FIRST_STEP;
  const rows = Float64Array.from([-1, 0, 0, 0, slow, 0, -1, -rotation, 0, 0, 0, rotation, -1, 0, 0, 1, 1, 0, 0, 0]);
  const linear = linearMode({ states: 3, outputs: 1, constants: 1, columns: 5, rows }, OMEGA, SHORTEST);
  let again = 0;
  for (const [startLevel, distance] of [4, 6].flatMap((level) => [0, 0.3, 0.6, 0.88].map((share) => [level, share] as const))) {
    const windows = { rows: new Int32Array(1), records: new Float64Array(WINDOW_STRIDE) };
    const mode = { linear, rest: linear.constantAnswers, windows, guardCount: 1, startLevel } as unknown as Mode;
    const isEntering = distance === 0;
    watchOutput(
      mode,
      0,
      0,
      isEntering ? 0 : Number.NEGATIVE_INFINITY,
      isEntering ? Number.POSITIVE_INFINITY : distance * slow * FIRST_STEP,
    );
    windows.records[WINDOW_SLACK] = GUARD_SLACK;
    for (let phase = 0; phase < 6.3; phase += 0.1) {
      for (let size = slow * FIRST_STEP; size > 1e-3 * slow * FIRST_STEP; size *= 0.8) {
        const swing = [size * Math.cos(phase), size * Math.sin(phase)] as const;
        // what begins on its bound begins on it again
        const second = Float64Array.of(isEntering ? -swing[0] : 0, ...swing);
        const walk = new ModeWalk(SHORTEST, 3, 1);
        mode.startLevel = startLevel;
        take(walk, mode, { x: new Float64Array(3), angle: 0 }, 4 * FIRST_STEP);
        if (retake(walk, mode, { x: second, angle: 0 }, 4 * FIRST_STEP) === null) continue;
        again++;
        const z = new Float64Array(linear.coordinates);
        walk.startCoordinates(z);
        expect(worstExcess(mode, z, walk.elapsed)).toBeLessThan(2 * GUARD_SLACK + ROUNDING);
      }
    }
  }
  expect(again).toBeGreaterThan(1000);
});

test('a walk in the place of a forgotten one is taken again with its own crossing', () => {
  // two decays, the slower of which the window's output falls with
  const rows = Float64Array.from([-3000, 0, 0, 0, 0, -200, 0, 0, 0.3, 1, 0, 0]);
  const linear = linearMode({ states: 2, outputs: 1, constants: 1, columns: 4, rows }, OMEGA, SHORTEST);
  const windows = { rows: new Int32Array(1), records: new Float64Array(WINDOW_STRIDE) };
  const mode = { linear, rest: linear.constantAnswers, windows, guardCount: 1, startLevel: 6 } as unknown as Mode;
  watchOutput(mode, 0, 0, 0.1, Number.POSITIVE_INFINITY);
  windows.records[WINDOW_SLACK] = GUARD_SLACK;
  const walk = new ModeWalk(SHORTEST, 2, 1);
  const z = new Float64Array(4);
  let again = 0;
  for (let k = 0; k < 2 * REMEMBERED_WALKS; k++) {
    const fast = Math.cos(k);
    for (const by of [0, 1e-7, -1e-7]) {
      const { steps } = walk;
      expect(take(walk, mode, { x: Float64Array.of(fast + by, 0.7 + 0.2 * Math.sin(k)), angle: 0 }, 1)).toBe('crossed');
      if (walk.steps === steps + 1) again++;
      walk.startCoordinates(z);
      expect(Math.abs(outputAfter(mode, z, 0, walk.elapsed) - 0.1)).toBeLessThan(ROOT_SHARE * GUARD_SLACK + ROUNDING);
    }
  }
  expect(again).toBeGreaterThan(REMEMBERED_WALKS);
});

const someMode = (): Mode => ({ linear: { coordinates: 2 } }) as unknown as Mode;
const somewhere = new Float64Array(2);

test('a walk may only be taken again in its own mode and under its own windows, and not once the dial was set', () => {
  const memory = new WalkMemory(2, 1);
  const [mode, other] = [someMode(), someMode()];
  memory.begin(mode, somewhere);
  const walk = memory.record(mode, 3, somewhere);
  const candidates = (): number[] => {
    memory.begin(mode, somewhere);
    return [memory.candidate(other, 3), memory.candidate(mode, 2), memory.candidate(mode, 3)];
  };
  expect(candidates()).toEqual([-1, -1, walk]);
  memory.forget();
  expect(candidates()).toEqual([-1, -1, -1]);
});

test('a walk whose place a later one has taken is remembered no more', () => {
  const memory = new WalkMemory(2, 1);
  const mode = someMode();
  memory.begin(mode, somewhere);
  memory.record(mode, 0, somewhere);
  memory.begin(mode, somewhere);
  expect(memory.candidate(mode, 0)).toBe(0);
  for (let k = 1; k < REMEMBERED_WALKS; k++) memory.record(mode, 1, Float64Array.of(1, 1));
  memory.record(mode, 0, somewhere);
  memory.begin(mode, somewhere);
  expect(memory.candidate(mode, 0)).toBe(-1);
});
