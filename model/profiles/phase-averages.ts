/** Folds the whole periods of a record onto one, averages the current phase by phase, and takes the probe's offset and polarity out. */
import type { Fundamental } from './fundamental.ts';
import type { PhasePoint } from './phase-table.ts';
import { AVERAGED_POINTS } from './profile-tolerances.ts';

export interface PhaseAverages {
  readonly points: readonly PhasePoint[];
  readonly periods: number;
  /** A, as recorded */
  readonly currentOffset: number;
  readonly reversed: boolean;
  /** A r.m.s. in one sample, and what of it is left in one point */
  readonly noise: number;
  readonly noiseOfPoint: number;
  /** W, and A r.m.s. of the points */
  readonly power: number;
  readonly rmsCurrent: number;
  /** r.m.s. share of the averaged voltage that is not the fundamental */
  readonly distortion: number;
}

/** White noise from second differences, whose median a smooth wave with a few edges hardly moves: sigma = median / (0.6745 sqrt 6). */
export function noiseOf(values: ArrayLike<number>, count: number): number {
  const differences = new Float64Array(Math.max(0, count - 2));
  for (let k = 0; k < differences.length; k++) {
    differences[k] = Math.abs((values[k] as number) - 2 * (values[k + 1] as number) + (values[k + 2] as number));
  }
  differences.sort();
  return (differences[Math.floor(differences.length / 2)] ?? 0) / (0.6745 * Math.sqrt(6));
}

interface Columns {
  readonly voltage: ArrayLike<number>;
  readonly current: ArrayLike<number>;
}

export function averagePhases({ voltage, current }: Columns, step: number, fundamental: Fundamental): PhaseAverages {
  const perPeriod = 1 / (fundamental.frequency * step);
  // a hundredth of a period for the error of the fitted frequency, so that a record of exactly n periods counts as n
  const periods = Math.max(1, Math.floor(voltage.length / perPeriod + 0.01));
  const used = Math.min(voltage.length, Math.round(periods * perPeriod));
  const bins = Math.min(AVERAGED_POINTS, Math.floor(perPeriod));
  const count = new Int32Array(bins);
  const phases = new Float64Array(bins);
  const volts = new Float64Array(bins);
  const amperes = new Float64Array(bins);
  for (let k = 0; k < used; k++) {
    const turns = fundamental.frequency * step * k + fundamental.phase / (2 * Math.PI);
    const phase = 360 * (turns - Math.floor(turns));
    const bin = Math.min(bins - 1, Math.floor((phase / 360) * bins));
    count[bin] = (count[bin] as number) + 1;
    phases[bin] = (phases[bin] as number) + phase;
    volts[bin] = (volts[bin] as number) + (voltage[k] as number);
    amperes[bin] = (amperes[bin] as number) + (current[k] as number);
  }
  const filled = [...count.keys()].filter((bin) => (count[bin] as number) > 0);
  const mean = (sums: Float64Array, bin: number): number => (sums[bin] as number) / (count[bin] as number);
  const currentOffset = filled.reduce((sum, bin) => sum + mean(amperes, bin), 0) / filled.length;
  let power = 0;
  let squared = 0;
  let stray = 0;
  for (const bin of filled) {
    const pure = fundamental.amplitude * Math.sin((mean(phases, bin) * Math.PI) / 180);
    const i = mean(amperes, bin) - currentOffset;
    power += (pure * i) / filled.length;
    squared += i ** 2 / filled.length;
    stray += (mean(volts, bin) - fundamental.offset - pure) ** 2 / filled.length;
  }
  const sign = power < 0 ? -1 : 1;
  const noise = noiseOf(current, used);
  return {
    points: filled.map((bin) => ({ phase: mean(phases, bin), current: sign * (mean(amperes, bin) - currentOffset) })),
    periods,
    currentOffset,
    reversed: sign < 0,
    noise,
    noiseOfPoint: noise / Math.sqrt(Math.max(1, used / filled.length)),
    power: Math.abs(power),
    rmsCurrent: Math.sqrt(squared),
    distortion: (Math.sqrt(stray) * Math.SQRT2) / fundamental.amplitude,
  };
}
