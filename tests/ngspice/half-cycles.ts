/** Turns the waveforms of a run into one record per half-cycle of the mains: firings, ends of conduction, charge, dumps of the timing capacitor. */
import type { RawTable } from './raw-file.ts';

export interface ReferenceHalfCycle {
  /** degrees within this half-cycle at which the triac goes from off to on */
  readonly firingAngles: readonly number[];
  /** degrees within this half-cycle at which it goes from on to off */
  readonly conductionEnds: readonly number[];
  /** integral of the line current, C, positive from live to lamp */
  readonly charge: number;
  /** integral of the current that leaves the dimmer to the lamps, C: differs from `charge` only where the dimmer has a neutral */
  readonly lampCharge: number;
  /** largest and smallest magnitude of the diac's timing voltage around the first dump in this half-cycle, V; null without one */
  readonly dump: { readonly from: number; readonly to: number } | null;
}

/** after a firing the timing capacitor has fallen as far as it will within this time, s */
const dumpTime = 150e-6;

export function readHalfCycles(table: RawTable, frequency: number, halfCycles: number): ReferenceHalfCycle[] {
  const column = (name: string): Float64Array => {
    const found = table.columns.get(name);
    if (found === undefined) throw new Error(`the run saved no ${name}`);
    return found;
  };
  const time = column('time');
  const duration = 1 / (2 * frequency);
  if ((time[table.rows - 1] ?? 0) < halfCycles * duration * (1 - 1e-9)) throw new Error(`the run stopped at ${time[table.rows - 1]} s`);
  const switches = crossings(time, column('v(on)'));
  const charge = integrals(time, column('i(vline)'), duration, halfCycles);
  const lampCharge = integrals(time, column('i(vlamp)'), duration, halfCycles);
  const angle = (at: number, k: number) => (at / duration - k) * 180;
  return Array.from({ length: halfCycles }, (_, k) => {
    const here = switches.filter(({ at }) => Math.floor(at / duration) === k);
    const firings = here.filter(({ rising }) => rising);
    return {
      firingAngles: firings.map(({ at }) => angle(at, k)),
      conductionEnds: here.filter(({ rising }) => !rising).map(({ at }) => angle(at, k)),
      charge: charge[k] ?? Number.NaN,
      lampCharge: lampCharge[k] ?? Number.NaN,
      dump: firings[0] === undefined ? null : dumpAt(time, column('v(vct)'), firings[0].at),
    };
  });
}

/** Times at which a vector that goes between 0 and 1 passes one half. */
function crossings(time: Float64Array, on: Float64Array): { at: number; rising: boolean }[] {
  const found: { at: number; rising: boolean }[] = [];
  for (let row = 1; row < time.length; row++) {
    const [v0, v1] = [on[row - 1] as number, on[row] as number];
    if (v0 < 0.5 === v1 < 0.5) continue;
    const [t0, t1] = [time[row - 1] as number, time[row] as number];
    found.push({ at: t0 + ((t1 - t0) * (0.5 - v0)) / (v1 - v0), rising: v1 > v0 });
  }
  return found;
}

/** Trapezoids over each half-cycle; a step that reaches across a boundary is divided there. */
function integrals(time: Float64Array, current: Float64Array, duration: number, halfCycles: number): Float64Array {
  const sums = new Float64Array(halfCycles + 1);
  for (let row = 1; row < time.length; row++) {
    const [t0, t1] = [time[row - 1] as number, time[row] as number];
    const [i0, i1] = [current[row - 1] as number, current[row] as number];
    const k = Math.min(Math.floor(t0 / duration), halfCycles);
    const boundary = (k + 1) * duration;
    if (t1 <= boundary || k >= halfCycles) {
      sums[k] = (sums[k] as number) + ((i0 + i1) / 2) * (t1 - t0);
      continue;
    }
    const between = i0 + ((i1 - i0) * (boundary - t0)) / (t1 - t0);
    sums[k] = (sums[k] as number) + ((i0 + between) / 2) * (boundary - t0);
    sums[k + 1] = (sums[k + 1] as number) + ((between + i1) / 2) * (t1 - boundary);
  }
  return sums.subarray(0, halfCycles);
}

function dumpAt(time: Float64Array, voltage: Float64Array, at: number): { from: number; to: number } {
  let from = 0;
  let to = Number.POSITIVE_INFINITY;
  for (let row = firstAfter(time, at - 2e-6); row < time.length && (time[row] as number) < at + dumpTime; row++) {
    const magnitude = Math.abs(voltage[row] as number);
    from = Math.max(from, magnitude);
    to = Math.min(to, magnitude);
  }
  return { from, to };
}

function firstAfter(time: Float64Array, at: number): number {
  let [low, high] = [0, time.length];
  while (low < high) {
    const middle = (low + high) >> 1;
    if ((time[middle] as number) < at) low = middle + 1;
    else high = middle;
  }
  return low;
}
