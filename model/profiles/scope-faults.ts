/** What can be wrong with a scope record, one check a fault, in the order in which they make sense. Null where all is well. */
import { type Fundamental, fitFundamental } from './fundamental.ts';
import type { PhaseAverages } from './phase-averages.ts';
import type { ScopeFailure } from './profile-failures.ts';
import {
  DISTORTION_LIMIT,
  FEWEST_SAMPLES_A_PERIOD,
  FREQUENCY_RANGE,
  RESIDUAL_LIMIT,
  SINE_LIKE,
  TIME_JITTER,
  VOLTAGE_RANGE,
} from './profile-tolerances.ts';
import { powerFault } from './recorded-power.ts';
import type { ScopeRecord } from './scope-record.ts';

const figures = (value: number): string => String(Number(value.toPrecision(3)));
const within = (value: number, [from, to]: readonly [number, number]): boolean => value >= from && value <= to;

/** Lengths, finite numbers, and a time that rises evenly. */
export function timeFault({ time, voltage, current, firstRow }: ScopeRecord): ScopeFailure | null {
  const n = time.length;
  if (voltage.length !== n || current.length !== n) {
    const detail = `The columns differ in length: ${n} times, ${voltage.length} voltages, ${current.length} currents.`;
    return { kind: 'unreadable-record', detail, row: null, column: null };
  }
  for (const [column, values] of Object.entries({ time, voltage, current })) {
    for (let k = 0; k < n; k++) {
      if (Number.isFinite(values[k])) continue;
      return { kind: 'unreadable-record', detail: `Row ${firstRow + k}: the ${column} is not a finite number.`, row: firstRow + k, column };
    }
  }
  if (n < 2) return shortRecord(time);
  for (let k = 1; k < n; k++) {
    if ((time[k] as number) > (time[k - 1] as number)) continue;
    const instead = (['voltage', 'current'] as const).find((column) => unevenAt({ voltage, current }[column]) === null);
    if (instead !== undefined) {
      const detail = `Time and ${instead} look exchanged: the ${instead} column rises evenly from row to row, the time column does not.`;
      return { kind: 'columns-swapped', detail };
    }
    const detail = `Row ${firstRow + k}: the time does not rise above that of the row before it (${figures(time[k - 1] as number)} s).`;
    return { kind: 'time-not-rising', detail, row: firstRow + k };
  }
  if ((time[n - 1] as number) - (time[0] as number) < 1 / FREQUENCY_RANGE[1] - Number.EPSILON) return shortRecord(time);
  const uneven = unevenAt(time);
  if (uneven === null) return null;
  const { row, off, step } = uneven;
  const detail = `Row ${firstRow + row}: the time is not even: it lies ${figures(off)} steps of ${figures(step)} s off, as where samples are missing.`;
  return { kind: 'time-not-even', detail, row: firstRow + row };
}

/** the first of a column's values that does not lie on a rising, even grid from its first to its last; null where all do */
function unevenAt(values: ArrayLike<number>): { readonly row: number; readonly off: number; readonly step: number } | null {
  const n = values.length;
  const step = ((values[n - 1] as number) - (values[0] as number)) / (n - 1);
  if (!(step > 0)) return { row: 0, off: 0, step };
  for (let k = 1; k < n; k++) {
    const off = Math.abs(((values[k] as number) - (values[0] as number)) / step - k);
    if (off > TIME_JITTER) return { row: k, off, step };
  }
  return null;
}

function shortRecord(time: ArrayLike<number>): ScopeFailure {
  const span = time.length < 2 ? 0 : (time[time.length - 1] as number) - (time[0] as number);
  return {
    kind: 'no-full-period',
    detail: `The record holds no full period: it spans ${figures(span * 1000)} ms, and a mains period takes 15 to 22 ms.`,
  };
}

/** Whether the columns hold what they are said to hold: voltage and current not exchanged, mains voltage, mains frequency. */
export function columnFault({ voltage, current }: ScopeRecord, step: number, fundamental: Fundamental): ScopeFailure | null {
  const span = voltage.length * step;
  const rms = fundamental.amplitude / Math.SQRT2;
  const fits = within(rms, VOLTAGE_RANGE);
  if (!fits || fundamental.distortion > DISTORTION_LIMIT) {
    const other = fitFundamental(current, step);
    const otherRms = other.amplitude / Math.SQRT2;
    // exchanged columns carry exchanged units too: a voltage read as so many mA is a thousandth of itself
    const mains = [1, 1000, 0.001].some((unit) => within(otherRms * unit, VOLTAGE_RANGE));
    const purer = other.distortion < SINE_LIKE || other.distortion < 0.5 * fundamental.distortion;
    if (mains && purer && other.frequency * span >= 0.99) {
      const detail = `Voltage and current look exchanged: the current column holds a sine of ${figures(otherRms)}, the voltage column ${figures(rms)}.`;
      return { kind: 'columns-swapped', detail };
    }
  }
  if (span * fundamental.frequency < 0.99) {
    return {
      kind: 'no-full-period',
      detail: `The record holds no full period: it spans ${figures(span * 1000)} ms of a sine of ${figures(fundamental.frequency)} Hz.`,
    };
  }
  if (!within(fundamental.frequency, FREQUENCY_RANGE)) {
    const detail = `The voltage has a frequency of ${figures(fundamental.frequency)} Hz: mains lie within ${FREQUENCY_RANGE.join(' to ')} Hz. Is the unit of the time right?`;
    return { kind: 'frequency-out-of-range', detail, value: fundamental.frequency };
  }
  if (!fits) {
    const detail = `The voltage is ${figures(rms)} V r.m.s.: mains lie within ${VOLTAGE_RANGE.join(' to ')} V. Are the unit of the voltage and the probe's factor right?`;
    return { kind: 'voltage-out-of-range', detail, value: rms };
  }
  return null;
}

export function periodFault(samples: number, step: number, { frequency }: Fundamental): ScopeFailure | null {
  const perPeriod = 1 / (frequency * step);
  // half a per cent for the error of the fitted frequency
  if (perPeriod >= 0.995 * FEWEST_SAMPLES_A_PERIOD) return null;
  const detail = `${figures(perPeriod)} samples a period (${samples} in all) are too few: ${FEWEST_SAMPLES_A_PERIOD} are needed to show how the current rises.`;
  return { kind: 'too-few-samples', detail };
}

/** What only shows once the periods are averaged: a voltage that is no sine, a power that cannot be, too much noise. */
export function currentFault(averages: PhaseAverages, fundamental: Fundamental, ratedPower: number | null): ScopeFailure | null {
  if (averages.distortion > DISTORTION_LIMIT) {
    const detail = `The voltage is not a sine: ${figures(100 * averages.distortion)} % of it (r.m.s.) is not at ${figures(fundamental.frequency)} Hz. Record the lamp on undimmed mains.`;
    return { kind: 'voltage-not-a-sine', detail };
  }
  // what is left of a constant current is the rounding of its mean
  if (averages.rmsCurrent <= 1e-9 * Math.abs(averages.currentOffset))
    return { kind: 'no-current', detail: 'The current is the same throughout: there is nothing to fit.' };
  const noise = averages.noiseOfPoint / averages.rmsCurrent;
  if (!(noise <= RESIDUAL_LIMIT)) {
    const detail = `The current is too noisy: after averaging ${averages.periods} periods, noise is ${figures(100 * noise)} % of its r.m.s. value, and at most ${100 * RESIDUAL_LIMIT} % can be fitted. Record more periods or use a smaller range.`;
    return { kind: 'too-noisy', detail, noise };
  }
  return powerFault(averages.power, ratedPower);
}
