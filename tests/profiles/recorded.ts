/**
 * Scope records of known lamps, made up as a scope would have written them: any start, any number of periods, probe offsets, reversed
 * probes, noise (the same every time), a vertical resolution and a range that clips.
 */
import type { Lamp } from '../../model/pairing.ts';
import type { ScopeRecord } from '../../model/profiles/scope-record.ts';
import { runUndimmed, type Sine } from '../../model/profiles/undimmed-lamp.ts';

export interface Scope extends Sine {
  readonly periods: number;
  readonly samplesPerPeriod: number;
  /** degrees at which the record starts */
  readonly start: number;
  /** V and A */
  readonly offsets: readonly [number, number];
  readonly noise: readonly [number, number];
  readonly reversed: readonly [boolean, boolean];
  /** bits over +-400 V and +-0.4 A, 0 for none */
  readonly bits: number;
  readonly range: readonly [number, number];
  /** share of the fundamental at three times its frequency in the recorded voltage; the current stays that of a pure sine */
  readonly thirdHarmonic: number;
}

export const ordinaryScope: Scope = {
  voltage: 230,
  frequency: 50,
  periods: 5.3,
  samplesPerPeriod: 400,
  start: 77,
  offsets: [2, 0.004],
  noise: [1, 0.002],
  reversed: [false, false],
  bits: 0,
  range: [1000, 10],
  thirdHarmonic: 0,
};

/** a linear congruential generator: the same noise every time */
function noiseSource(): () => number {
  let state = 20_250_101;
  const even = (): number => {
    state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0;
    return state / 2 ** 32 - 0.5;
  };
  // four even ones add up to nearly a normal one of variance 1
  return () => (even() + even() + even() + even()) * Math.sqrt(3);
}

export function recorded(lamp: Lamp, change: Partial<Scope> = {}): ScopeRecord & Record<'time' | 'voltage' | 'current', number[]> {
  const scope = { ...ordinaryScope, ...change };
  const run = runUndimmed(lamp, scope);
  if (run === null) throw new Error('the lamp does not run');
  const noise = noiseSource();
  const seen = (value: number, probe: 0 | 1): number => {
    const [full, range] = [[400, 0.4][probe] as number, scope.range[probe]];
    const off = (scope.reversed[probe] ? -value : value) + scope.offsets[probe] + scope.noise[probe] * noise();
    const cut = Math.max(-range, Math.min(range, off));
    const step = full / 2 ** (scope.bits - 1);
    return scope.bits === 0 ? cut : Math.round(cut / step) * step;
  };
  const record = { time: [] as number[], voltage: [] as number[], current: [] as number[], firstRow: 2 };
  for (let k = 0; k < Math.round(scope.periods * scope.samplesPerPeriod); k++) {
    const phase = scope.start + (360 * k) / scope.samplesPerPeriod;
    const sine = Math.sin((phase * Math.PI) / 180) + scope.thirdHarmonic * Math.sin((3 * phase * Math.PI) / 180);
    record.time.push(-0.012 + k / (scope.frequency * scope.samplesPerPeriod));
    record.voltage.push(seen(scope.voltage * Math.SQRT2 * sine, 0));
    record.current.push(seen(run.currentAt(phase), 1));
  }
  return record;
}
