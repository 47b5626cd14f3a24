/** Chunks of cheap pairings for tests of the queues, and what the model says about them. */
import { MODEL_VERSION } from '../../model/index.ts';
import type { Answer, Chunk } from '../../server/queue/judging-queue.ts';
import { askedPairingOf } from '../../server/queue/question-judging.ts';
import { frameOf } from '../../server/screenings/screening-frame.ts';
import type { AskedJudgement } from '../../server/simulation/asked-circuit.ts';
import { judgeAsked } from '../../server/simulation/asked-judging.ts';
import { fingerprintOf } from '../../server/verdicts/canonical-inputs.ts';
import { completePairing } from '../../server/verdicts/pairing-completion.ts';
import { toModel } from '../../server/verdicts/pairing-to-model.ts';
import { cheapScreening, dimmerEntryOf, lampEntryOf } from './screening-catalogue.ts';

/** `count` pairings that differ in the lamp. */
export function chunkOf(count: number, screening = 'screening', from = 0): Chunk {
  const lamps = Array.from({ length: count }, (_, index) => lampEntryOf(from + index).lamp);
  const bare: Chunk = {
    screening,
    modelVersion: MODEL_VERSION,
    frame: frameOf(cheapScreening()),
    lamps,
    dimmers: [dimmerEntryOf(0).dimmer],
    questions: lamps.map((_, lamp) => ({ position: from + lamp, fingerprint: '', lamp, dimmer: 0, count: 1 })),
  };
  const questions = bare.questions.map((question) => {
    const completion = completePairing(askedPairingOf(bare, question));
    return { ...question, fingerprint: fingerprintOf(completion, MODEL_VERSION) };
  });
  return { ...bare, questions };
}

/** What the answers must be, by position. */
export function expectedJudgements(chunk: Chunk): ReadonlyMap<number, AskedJudgement> {
  return new Map(
    chunk.questions.map((question) => {
      const completion = completePairing(askedPairingOf(chunk, question));
      const { pairing, options } = toModel(completion);
      const outcome = judgeAsked(pairing, options);
      if (!outcome.ok) throw new Error('It was to be judged.');
      // As JSON carries it: without the sign of a zero.
      return [question.position, JSON.parse(JSON.stringify(outcome.value)) as AskedJudgement];
    }),
  );
}

export function judgementsOf(answers: readonly Answer[]): ReadonlyMap<number, AskedJudgement> {
  return new Map(
    answers.flatMap((answer) => (answer.ok ? [[answer.position, JSON.parse(JSON.stringify(answer.judgement)) as AskedJudgement]] : [])),
  );
}
