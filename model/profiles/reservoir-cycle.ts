/**
 * The settled half-cycle of a reservoir lamp on a stiff sine, by fixed small steps: quick enough to guide a search. What a fit reports
 * is judged by the engine, not by this.
 */
import { BRIDGE_DROP } from '../tolerances.ts';
import { CYCLE_BUDGET, CYCLE_REPEATS, CYCLE_STEPS } from './profile-tolerances.ts';
import type { Sine } from './undimmed-lamp.ts';

export interface ReservoirValues {
  /** series and surge resistance together */
  readonly resistance: number;
  readonly capacitance: number;
  readonly power: number;
}

export interface ReservoirCycle {
  /** A through the bridge at k/CYCLE_STEPS of the half-cycle, k = 0 .. CYCLE_STEPS */
  readonly current: Float64Array;
  /** V, the reservoir's lowest */
  readonly trough: number;
}

export function reservoirCycle({ resistance, capacitance, power }: ReservoirValues, sine: Sine): ReservoirCycle {
  const peak = sine.voltage * Math.SQRT2;
  const step = 1 / (2 * sine.frequency * CYCLE_STEPS);
  const fading = Math.exp(-step / (resistance * capacitance));
  const current = new Float64Array(CYCLE_STEPS + 1);
  let v = peak - BRIDGE_DROP;
  let trough = v;
  for (let cycle = 0; cycle < CYCLE_BUDGET; cycle++) {
    const before = v;
    trough = v;
    for (let k = 0; k < CYCLE_STEPS; k++) {
      const behind = peak * Math.sin((Math.PI * k) / CYCLE_STEPS) - BRIDGE_DROP;
      current[k] = Math.max(0, (behind - v) / resistance);
      const middle = peak * Math.sin((Math.PI * (k + 0.5)) / CYCLE_STEPS) - BRIDGE_DROP;
      if (middle > v) {
        const rest = middle - (resistance * power) / v;
        v = rest + (v - rest) * fading;
      } else v = Math.sqrt(Math.max(v * v - (2 * power * step) / capacitance, (0.05 * peak) ** 2));
      if (v < trough) trough = v;
    }
    if (Math.abs(v - before) < CYCLE_REPEATS * peak) break;
  }
  current[CYCLE_STEPS] = Math.max(0, (-BRIDGE_DROP - v) / resistance);
  return { current, trough };
}

/** A at a phase in degrees, without the input capacitor */
export function cycleCurrent(cycle: ReservoirCycle, phase: number): number {
  const turned = ((phase % 360) + 360) % 360;
  const at = ((turned % 180) / 180) * CYCLE_STEPS;
  const k = Math.min(CYCLE_STEPS - 1, Math.floor(at));
  const i = (cycle.current[k] as number) + (at - k) * ((cycle.current[k + 1] as number) - (cycle.current[k] as number));
  return turned < 180 ? i : -i;
}
