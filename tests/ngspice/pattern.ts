/**
 * Whether a run's half-cycles settle into a pattern that repeats, and if not, its averages. Charges are counted positive in the
 * half-cycle's own polarity, so a lamp that is treated alike in both polarities repeats after one half-cycle.
 */

export interface HalfCycle {
  readonly firingAngles: readonly number[];
  /** C, positive from live to lamp */
  readonly charge: number;
}

export interface Averages {
  /** firings per half-cycle */
  readonly firings: number;
  readonly silentShare: number;
  /** magnitude, C per half-cycle */
  readonly charge: number;
  readonly observed: number;
}

export type Pattern =
  | { readonly kind: 'repeats'; readonly settledAfter: number; readonly halfCycles: readonly HalfCycle[] }
  | ({ readonly kind: 'wanders' } & Averages);

/** longest pattern looked for, half-cycles */
const longest = 8;
/** how often it must have repeated, half-cycles in all */
const witnessed = 12;

/** Even records are positive half-cycles; averages leave out the first `settle`. */
export function patternOf(run: readonly HalfCycle[], settle: number): Pattern {
  const turned = inOwnPolarity(run);
  for (let period = 1; period <= longest; period++) {
    let from = turned.length;
    while (from > period && alike(turned[from - 1] as HalfCycle, turned[from - 1 - period] as HalfCycle)) from--;
    const first = from - period;
    if (turned.length - from < Math.max(witnessed, 2 * period)) continue;
    // the pattern as it stands at the end, beginning with a positive half-cycle
    const start = turned.length - period - ((turned.length - period) % 2);
    return { kind: 'repeats', settledAfter: first, halfCycles: turned.slice(start, start + period) };
  }
  return { kind: 'wanders', ...averagesOf(turned.slice(settle)) };
}

export function averagesOf(run: readonly HalfCycle[]): Averages {
  const mean = (of: (halfCycle: HalfCycle) => number) => run.reduce((sum, halfCycle) => sum + of(halfCycle), 0) / run.length;
  return {
    firings: mean(({ firingAngles }) => firingAngles.length),
    silentShare: mean(({ firingAngles }) => (firingAngles.length === 0 ? 1 : 0)),
    charge: mean(({ charge }) => Math.abs(charge)),
    observed: run.length,
  };
}

/** Charges counted positive in the half-cycle's own polarity; the first record is a positive half-cycle. */
export function inOwnPolarity(run: readonly HalfCycle[]): HalfCycle[] {
  return run.map(({ firingAngles, charge }, k) => ({ firingAngles, charge: k % 2 === 0 ? charge : -charge }));
}

function alike(a: HalfCycle, b: HalfCycle): boolean {
  return (
    a.firingAngles.length === b.firingAngles.length &&
    a.firingAngles.every((angle, n) => Math.abs(angle - (b.firingAngles[n] as number)) < 0.02) &&
    Math.abs(a.charge - b.charge) <= 1e-3 * Math.max(Math.abs(a.charge), Math.abs(b.charge)) + 1e-8
  );
}
