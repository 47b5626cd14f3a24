/**
 * What a screening asks of whatever judges its pairings, and what crosses to it: declared once, for both sides. Two engines:
 * embedded-queue.ts (this process's threads) and redis-queue.ts (worker processes over Redis). Neither stores anything; answers may come
 * more than once and in any order, and who asked writes them down once.
 */
import type { AskedDimmer, AskedLamp, AskedPairing } from '../schemas/pairing.ts';
import type { AskedJudgement } from '../simulation/asked-circuit.ts';

/** What every pairing of a screening shares. */
export type PairingFrame = Omit<AskedPairing, 'dimmer' | 'lamps'>;

/** One pairing to be judged: a lamp and a dimmer of its chunk. */
export interface Question {
  /** in the screening */
  readonly position: number;
  /** of the completed pairing and the model version: what the answer is stored under */
  readonly fingerprint: string;
  /** indices into the chunk's lists */
  readonly lamp: number;
  readonly dimmer: number;
  readonly count: number;
}

/** Pairings that travel together. Plain JSON. */
export interface Chunk {
  readonly screening: string;
  /** who judges under another one refuses it */
  readonly modelVersion: string;
  readonly frame: PairingFrame;
  readonly lamps: readonly AskedLamp[];
  readonly dimmers: readonly AskedDimmer[];
  readonly questions: readonly Question[];
}

export interface AnswerFailure {
  readonly kind: 'invalid-pairing' | 'profile-refused' | 'thread-lost' | 'worker-lost';
  readonly detail: string;
  readonly attempts: number;
}

export type Answer = { readonly position: number; readonly fingerprint: string } & (
  | { readonly ok: true; readonly judgement: AskedJudgement /** ms of one thread */; readonly took_ms: number }
  | { readonly ok: false; readonly failure: AnswerFailure }
);

/**
 * `done`: every question was answered, or left open for a reason that is over, and may be asked again. `stopped`: the queue is being
 * closed. `unreachable`: whoever judges cannot be reached now.
 */
export type ChunkEnd = { readonly kind: 'done' } | { readonly kind: 'stopped' } | { readonly kind: 'unreachable'; readonly detail: string };

export interface JudgingQueue {
  /** chunks that may be under way at once, so that nobody who judges runs dry; the caller keeps to it */
  readonly chunksAtOnce: number;
  /** Judges the chunk; answers are delivered as they come, all of them before the end. */
  judge(chunk: Chunk, deliver: (answers: readonly Answer[]) => void): Promise<ChunkEnd>;
  /** Drops what waits of a screening that was cancelled. */
  forget(screening: string): Promise<void>;
  /** How many pairings are judged side by side, as far as it is known; undefined where it is not. */
  breadth(): Promise<number | undefined>;
  /** Why nothing moves although nothing is wrong with the queue, in a sentence; undefined where nobody waits in vain. */
  waitingFor(): Promise<string | undefined>;
  /** Begins nothing any more, lets what runs in this process be delivered, and lets go of what it holds. */
  close(): Promise<void>;
}
