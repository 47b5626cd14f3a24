/**
 * What the use cases ask of a simulation, and the messages that carry it to a thread: declared once, for both sides. Two
 * implementations: simulation-pool.ts (threads) and direct-simulation.ts (the calling thread).
 */
import type { JudgeOptions, ModelFailure, Pairing, ProfileFailure, Requirement, Sweep, Waveforms } from '../../model/index.ts';
import type { AskedCircuit, AskedJudgement, AskedOptions } from './asked-circuit.ts';
import type { FittedProfile, ProfileQuestion } from './profile-fitting.ts';

export type CircuitFailure =
  | ModelFailure
  /** a record cannot be fitted, or no circuit of a class is like the lamp; `group` is its place among the lamps, null where it is not one */
  | { readonly kind: 'profile-refused'; readonly group: number | null; readonly failure: ProfileFailure };

export type SimulationFailure =
  | CircuitFailure
  /** too many tasks wait; `retryAfter_s` is when some of them will be done */
  | { readonly kind: 'queue-full'; readonly retryAfter_s: number };

export type Simulated<T> = { readonly ok: true; readonly value: T } | { readonly ok: false; readonly failure: SimulationFailure };

export interface WaveformPlace {
  readonly sweep: Sweep;
  readonly position: number;
}

export interface Simulation {
  judge(pairing: AskedCircuit, options: AskedOptions): Promise<Simulated<AskedJudgement>>;
  recordWaveforms(pairing: Pairing, dialPositions: readonly number[], place: WaveformPlace): Promise<Simulated<Waveforms>>;
  boundRequirement(pairing: Pairing, options: JudgeOptions): Promise<Simulated<Requirement>>;
  fitProfile(question: ProfileQuestion): Promise<Simulated<FittedProfile>>;
}

export type BackgroundFailure =
  | CircuitFailure
  /** the thread died or hung over this pairing, and a fresh one did so again */
  | { readonly kind: 'thread-lost'; readonly detail: string; readonly attempts: number }
  /** the threads are being ended: the pairing was not judged, and nothing is wrong with it */
  | { readonly kind: 'stopping' };

export type BackgroundJudged =
  | { readonly ok: true; readonly value: AskedJudgement /** in the thread */; readonly took_ms: number }
  | { readonly ok: false; readonly failure: BackgroundFailure };

/** Judging that nobody waits for: behind every interactive question, never refused for a full queue, held to a deadline. */
export interface BackgroundSimulation {
  judgeInBackground(pairing: AskedCircuit, options: AskedOptions): Promise<BackgroundJudged>;
}

export type SimulationTask =
  | {
      readonly kind: 'judge';
      readonly pairing: AskedCircuit;
      readonly options: AskedOptions;
      /** one whole number in shared memory that the thread sets to 1 when it begins */
      readonly begun?: Int32Array;
    }
  | {
      readonly kind: 'waveforms';
      readonly pairing: Pairing;
      readonly dialPositions: readonly number[];
      readonly place: WaveformPlace;
    }
  | { readonly kind: 'requirement'; readonly pairing: Pairing; readonly options: JudgeOptions }
  | { readonly kind: 'profile'; readonly question: ProfileQuestion }
  /** only starts a thread */
  | { readonly kind: 'nothing' };
