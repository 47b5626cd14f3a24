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

export type BackgroundFailure =
  | ModelFailure
  /** the thread died or hung over this pairing, and a fresh one did so again */
  | { readonly kind: 'thread-lost'; readonly detail: string; readonly attempts: number }
  /** the threads are being ended: the pairing was not judged, and nothing is wrong with it */
  | { readonly kind: 'stopping' };

export type BackgroundJudged =
  | { readonly ok: true; readonly value: Judgement /** in the thread */; readonly took_ms: number }
  | { readonly ok: false; readonly failure: BackgroundFailure };

/** Judging that nobody waits for: behind every interactive question, never refused for a full queue, held to a deadline. */
export interface BackgroundSimulation {
  judgeInBackground(pairing: Pairing, options: JudgeOptions): Promise<BackgroundJudged>;
}

export type SimulationTask =
  | {
      readonly kind: 'judge';
      readonly pairing: Pairing;
      readonly options: JudgeOptions;
      /** one whole number in shared memory that the thread sets to 1 when it begins */
      readonly begun?: Int32Array;
    }
  | {
      readonly kind: 'waveforms';
      readonly pairing: Pairing;
      readonly dialPositions: readonly number[];
      readonly place: WaveformPlace;
    };
