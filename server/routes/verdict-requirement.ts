/** What dimmer the lamps of a stored verdict would want. */
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import type { AppDependencies } from '../app.ts';
import { problemResponses } from '../schemas/problem.ts';
import { requirement } from '../schemas/requirement.ts';
import { verdictParams } from '../schemas/verdict-calls.ts';
import { verdictRequirements } from '../verdicts/verdict-requirement.ts';
import { replyToFailure } from './verdict-failures.ts';

export function verdictRequirementRoute(dependencies: AppDependencies): FastifyPluginAsyncZod {
  const requirementOf = verdictRequirements(dependencies);

  return async (app) => {
    app.get(
      '/v1/verdicts/:id/requirement',
      {
        schema: {
          operationId: 'readRequirement',
          tags: ['verdicts'],
          summary: 'What dimmer would do for these lamps',
          description:
            'The largest latching and holding currents with which the lamps of this verdict are suitable at every corner, everything else of the dimmer as judged. Simulated when it is first asked for, by the present model version, which takes from seconds to minutes; then kept.',
          params: verdictParams,
          response: {
            200: { description: 'The requirement.', content: { 'application/json': { schema: requirement } } },
            ...problemResponses(
              'invalid-request',
              'verdict-not-found',
              'pairing-cannot-be-simulated',
              'internal',
              'queue-full',
              'stopping',
            ),
          },
        },
      },
      async (request, reply) => {
        const found = await requirementOf(request.params.id);
        return found.ok ? reply.send(found.requirement) : replyToFailure(reply, found.failure);
      },
    );
  };
}
