/** Which problem document each expected failure of judging and of recording becomes. */
import type { FastifyReply } from 'fastify';
import type { ReferenceFailure } from '../catalogue/pairing-references.ts';
import { sendProblem } from '../problem-replies.ts';
import type { SimulationFailure } from '../simulation/simulation.ts';
import type { WaveformsFailure } from '../verdicts/verdict-waveforms.ts';
import { sendProfileProblem } from './profile-failures.ts';

export function replyToFailure(reply: FastifyReply, failure: SimulationFailure | ReferenceFailure | WaveformsFailure): FastifyReply {
  switch (failure.kind) {
    case 'queue-full':
      return sendProblem(reply, 'queue-full', `Ask again in ${failure.retryAfter_s} s.`, { retryAfter_s: failure.retryAfter_s });
    case 'profile-refused':
      return sendProfileProblem(reply, failure);
    case 'invalid-pairing':
      return sendProblem(reply, 'pairing-cannot-be-simulated', 'The model refuses this circuit.', { issues: failure.issues });
    case 'entries-not-known':
      return sendProblem(reply, 'entries-not-known', 'Put it first, or give it in full.', { issues: failure.issues });
    case 'verdict-not-found':
      return sendProblem(reply, 'verdict-not-found', 'No verdict is stored under this id.');
    case 'not-judged-there':
      return sendProblem(reply, 'invalid-request', 'One thing is wrong with it.', {
        issues: [{ path: failure.path, message: failure.message }],
      });
  }
}
