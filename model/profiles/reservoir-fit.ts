/**
 * Fits a reservoir lamp to a phase table: reservoir capacitor, resistance before it, power, and the input capacitor beside it. The
 * power follows nearly from the record itself, the capacitor from where the arc begins, the resistance from how it ends.
 */
import { BRIDGE_DROP } from '../tolerances.ts';
import { type PhaseTable, pointWeights, tableMeans } from './phase-table.ts';
import { ARC_BEGIN, ARC_END, ARC_LEAN, ARC_SHARE, NEAR_ZERO_CROSSING } from './profile-tolerances.ts';
import { cycleCurrent, reservoirCycle } from './reservoir-cycle.ts';
import { searchLeast } from './simplex-search.ts';

export interface ReservoirFit {
  readonly inputCapacitance: number;
  /** series and surge resistance together */
  readonly resistance: number;
  readonly capacitance: number;
  readonly power: number;
  /** V, the reservoir's lowest on the recorded sine */
  readonly trough: number;
}

/** Where current besides an input capacitor's flows. */
export interface ConductionArc {
  /** degrees after the zero crossing */
  readonly from: number;
  readonly to: number;
  /** points inside it, of one half-cycle */
  readonly points: number;
}

/** The capacitor is judged by the current around the zero crossings: wrong for a lamp that draws more there, whose arc is wide anyway. */
export function conductionArc(table: PhaseTable): ConductionArc {
  const peak = table.voltage * Math.SQRT2;
  const turned = table.points.map(({ phase, current }) => {
    const angle = (phase * Math.PI) / 180;
    const sign = Math.sin(angle) < -1e-9 ? -1 : 1;
    return {
      at: phase % 180,
      i: sign * current,
      perFarad: sign * 2 * Math.PI * table.frequency * peak * Math.cos(angle),
      sine: Math.sin(angle),
    };
  });
  const guesses = turned
    .filter(({ sine }) => Math.abs(sine) < NEAR_ZERO_CROSSING)
    .map(({ i, perFarad }) => i / perFarad)
    .sort((a, b) => a - b);
  const capacitance = Math.max(0, guesses[Math.floor(guesses.length / 2)] ?? 0);
  const rest = turned.map(({ at, i, perFarad }) => ({ at, i: i - capacitance * perFarad }));
  const most = rest.reduce((max, r) => Math.max(max, r.i), 0);
  const inside = rest.filter((r) => r.i > ARC_SHARE * most).map((r) => r.at);
  const halfCycles = (table.points[table.points.length - 1]?.phase ?? 0) > 180 + 1e-6 ? 2 : 1;
  return {
    from: inside.reduce((a, b) => Math.min(a, b), 180),
    to: inside.reduce((a, b) => Math.max(a, b), 0),
    points: inside.length / halfCycles,
  };
}

/** whether an arc is short and ends near the crest, as only a reservoir's does: a curve of the voltage conducts on both sides alike */
export function isReservoirArc({ from, to }: ConductionArc): boolean {
  return from >= ARC_BEGIN && from < 90 && to <= ARC_END && to - 90 < ARC_LEAN * (90 - from);
}

export function fitReservoir(table: PhaseTable, arc: { readonly from: number }): ReservoirFit {
  const peak = table.voltage * Math.SQRT2;
  const omega = 2 * Math.PI * table.frequency;
  const weights = pointWeights(table);
  const { power, rmsCurrent } = tableMeans(table);
  const tried = (at: readonly number[]) => {
    const [resistance, capacitance, drain] = at.map(Math.exp) as [number, number, number];
    const cycle = reservoirCycle({ resistance, capacitance, power: drain }, table);
    // the input capacitor's share is linear: its best value follows at once
    let above = 0;
    let below = 0;
    const left = table.points.map(({ phase, current }, k) => {
      const perFarad = omega * peak * Math.cos((phase * Math.PI) / 180);
      const rest = current - cycleCurrent(cycle, phase);
      above += (weights[k] as number) * rest * perFarad;
      below += (weights[k] as number) * perFarad * perFarad;
      return { perFarad, rest };
    });
    const inputCapacitance = Math.max(0, above / below);
    const error = left.reduce((sum, { rest, perFarad }, k) => sum + (weights[k] as number) * (rest - inputCapacitance * perFarad) ** 2, 0);
    return { error, fit: { inputCapacitance, resistance, capacitance, power: drain, trough: cycle.trough } };
  };
  // at the start of the arc the mains meets the trough: C (Vp^2 - Vmin^2)/2 was drained since the crest
  const trough = peak * Math.sin((arc.from * Math.PI) / 180);
  const drained = (power * (Math.PI / 2 + (arc.from * Math.PI) / 180)) / omega;
  const capacitance = (2 * drained) / Math.max(peak ** 2 - trough ** 2, 0.01 * peak ** 2);
  const starts = [5, 25, 100].map((resistance) => {
    const losses = resistance * rmsCurrent ** 2 + BRIDGE_DROP * 0.5 * rmsCurrent;
    return [resistance, capacitance, Math.max(power - losses, 0.5 * power)].map(Math.log);
  });
  const ends = starts.map((start) => searchLeast((at) => tried(at).error, start, 0.2));
  const best = ends.reduce((a, b) => (b.value < a.value ? b : a));
  return tried(searchLeast((at) => tried(at).error, best.at, 0.05).at).fit;
}
