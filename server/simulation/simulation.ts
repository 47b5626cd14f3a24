/**
 * What the use cases ask of a simulation, and the messages that carry it to a thread: declared once, for both sides. Two
 * implementations: simulation-pool.ts (threads) and direct-simulation.ts (the calling thread).
 */
import type { Judgement, JudgeOptions, ModelFailure, Pairing, Sweep, Waveforms } from '../../model/index.ts';

export type SimulationFailure =
  | ModelFailure
  /** too many tasks wait; `retryAfter_s` is when some of them will be done */
  | { readonly kind: 'queue-full'; readonly retryAfter_s: number };

export type Simulated<T> = { readonly ok: true; readonly value: T } | { readonly ok: false; readonly failure: SimulationFailure };

export interface WaveformPlace {
  readonly sweep: Sweep;
  readonly position: number;
}

export interface Simulation {
  judge(pairing: Pairing, options: JudgeOptions): Promise<Simulated<Judgement>>;
  recordWaveforms(pairing: Pairing, dialPositions: readonly number[], place: WaveformPlace): Promise<Simulated<Waveforms>>;
}

export type SimulationTask =
  | { readonly kind: 'judge'; readonly pairing: Pairing; readonly options: JudgeOptions }
  | {
      readonly kind: 'waveforms';
      readonly pairing: Pairing;
      readonly dialPositions: readonly number[];
      readonly place: WaveformPlace;
    };
