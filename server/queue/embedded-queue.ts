/** Judges chunks in this process's simulation threads, behind every interactive question. What runs out with the process is asked again. */
import type { BackgroundSimulation } from '../simulation/simulation.ts';
import { threadLanes } from '../simulation/thread-lanes.ts';
import type { Answer, Chunk, JudgingQueue } from './judging-queue.ts';
import { judgeQuestion } from './question-judging.ts';

export function embeddedQueue(simulation: BackgroundSimulation, threads: number): JudgingQueue {
  // One more than there are threads: it stands ready when a thread comes free.
  const gate = threadLanes(threads + 1);
  let closing = false;
  const forgotten = new Set<string>();

  const judgeOne = async (chunk: Chunk, index: number, deliver: (answers: readonly Answer[]) => void): Promise<void> => {
    const question = chunk.questions[index];
    if (question === undefined || !(await gate.enter('background'))) return;
    try {
      if (closing || forgotten.has(chunk.screening)) return;
      const outcome = await judgeQuestion(simulation, chunk, question);
      if (outcome.kind === 'answered') deliver([outcome.answer]);
      if (outcome.kind === 'refused') throw new Error(`This process refused its own question: ${outcome.detail}.`);
    } finally {
      gate.leave();
    }
  };

  return {
    // Of a chunk of one pairing each, so many keep every thread busy.
    chunksAtOnce: threads + 2,
    judge: async (chunk, deliver) => {
      await Promise.all(chunk.questions.map((_, index) => judgeOne(chunk, index, deliver)));
      return { kind: closing ? 'stopped' : 'done' };
    },
    forget: async (screening) => void forgotten.add(screening),
    breadth: async () => threads,
    waitingFor: async () => undefined,
    close: async () => {
      closing = true;
      await gate.idle();
    },
  };
}
