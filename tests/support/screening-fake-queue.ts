/** A queue whose answers a test decides, and which counts how often each question was asked. */
import type { Answer, AnswerFailure, Chunk, ChunkEnd, JudgingQueue, Question } from '../../server/queue/judging-queue.ts';
import { CANNED_JUDGEMENT } from './server-fake-simulation.ts';

export interface FakeQueue extends JudgingQueue {
  /** how often each fingerprint was asked */
  readonly asked: ReadonlyMap<string, number>;
  /** questions asked in all */
  readonly questions: () => number;
}

export interface FakeBehaviour {
  /** what becomes of a question; undefined: it is left open */
  readonly answer?: (question: Question) => AnswerFailure | 'judged' | undefined | Promise<AnswerFailure | 'judged' | undefined>;
  /** how a chunk ends, asked after its answers */
  readonly end?: (chunk: Chunk) => ChunkEnd;
}

export function fakeQueue({ answer = () => 'judged', end = () => ({ kind: 'done' }) }: FakeBehaviour = {}): FakeQueue {
  const asked = new Map<string, number>();
  let questions = 0;
  let closing = false;
  let close: () => void = () => undefined;
  const closed = new Promise<undefined>((resolve) => {
    close = () => resolve(undefined);
  });
  return {
    asked,
    questions: () => questions,
    chunksAtOnce: 2,
    judge: async (chunk, deliver) => {
      for (const question of chunk.questions) {
        questions += 1;
        asked.set(question.fingerprint, (asked.get(question.fingerprint) ?? 0) + 1);
        const outcome = await Promise.race([answer(question), closed]);
        if (outcome !== undefined) deliver([answerOf(question, outcome)]);
        if (closing) return { kind: 'stopped' };
      }
      return end(chunk);
    },
    forget: async () => undefined,
    breadth: async () => 1,
    waitingFor: async () => undefined,
    close: async () => {
      closing = true;
      close();
    },
  };
}

function answerOf({ position, fingerprint }: Question, outcome: AnswerFailure | 'judged'): Answer {
  if (outcome !== 'judged') return { position, fingerprint, ok: false, failure: outcome };
  return { position, fingerprint, ok: true, judgement: CANNED_JUDGEMENT, took_ms: 1 };
}
