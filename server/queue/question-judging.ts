/**
 * Judges one question of a chunk: the one way, whichever engine carries it. Completes the pairing as the interactive call does, refuses
 * what this code would not have asked, and has the rest simulated in the background.
 */
import { MODEL_VERSION } from '../../model/index.ts';
import type { AskedPairing } from '../schemas/pairing.ts';
import type { BackgroundFailure, BackgroundSimulation } from '../simulation/simulation.ts';
import { fingerprintOf } from '../verdicts/canonical-inputs.ts';
import { completePairing } from '../verdicts/pairing-completion.ts';
import { toModel } from '../verdicts/pairing-to-model.ts';
import type { Answer, AnswerFailure, Chunk, Question } from './judging-queue.ts';

export type QuestionOutcome =
  | { readonly kind: 'answered'; readonly answer: Answer }
  /** the threads are being ended: the question stays open */
  | { readonly kind: 'stopping' }
  /** another model version, or code that completes pairings otherwise, asked it */
  | { readonly kind: 'refused'; readonly detail: string };

export async function judgeQuestion(simulation: BackgroundSimulation, chunk: Chunk, question: Question): Promise<QuestionOutcome> {
  if (chunk.modelVersion !== MODEL_VERSION) {
    return { kind: 'refused', detail: `the pairing is for model version ${chunk.modelVersion}, this is ${MODEL_VERSION}` };
  }
  const { position, fingerprint } = question;
  const completion = completePairing(askedPairingOf(chunk, question));
  if (fingerprintOf(completion, MODEL_VERSION) !== fingerprint) {
    return { kind: 'refused', detail: 'this code completes the pairing otherwise than the one that asked: their versions differ' };
  }
  const { pairing, options } = toModel(completion);
  const judged = await simulation.judgeInBackground(pairing, options);
  if (judged.ok) {
    return { kind: 'answered', answer: { position, fingerprint, ok: true, judgement: judged.value, took_ms: judged.took_ms } };
  }
  const { failure } = judged;
  if (failure.kind === 'stopping') return { kind: 'stopping' };
  return { kind: 'answered', answer: { position, fingerprint, ok: false, failure: told(failure) } };
}

function told(failure: Exclude<BackgroundFailure, { kind: 'stopping' }>): AnswerFailure {
  switch (failure.kind) {
    case 'invalid-pairing':
      return { kind: failure.kind, detail: failure.issues.map(({ path, message }) => `${path} ${message}`).join('; '), attempts: 1 };
    case 'profile-refused':
      return { kind: failure.kind, detail: failure.failure.detail, attempts: 1 };
    case 'thread-lost':
      return failure;
  }
}

export function askedPairingOf(chunk: Chunk, { lamp, dimmer, count }: Question): AskedPairing {
  const askedLamp = chunk.lamps[lamp];
  const askedDimmer = chunk.dimmers[dimmer];
  if (askedLamp === undefined || askedDimmer === undefined) throw new Error('A question names a lamp or a dimmer that its chunk lacks.');
  return { ...chunk.frame, dimmer: askedDimmer, lamps: [{ count, lamp: askedLamp }] };
}
