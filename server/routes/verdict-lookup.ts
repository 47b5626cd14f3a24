/** Looking up the stored verdicts of many pairs in one call. */
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import { lookUpVerdicts, type PairDependencies } from '../catalogue/pair-verdicts.ts';
import { problemResponses } from '../schemas/problem.ts';
import { lookupAnswer, lookupRequest, MOST_LOOKUPS } from '../schemas/verdict-lookup.ts';

export function verdictLookupRoute(dependencies: PairDependencies): FastifyPluginAsyncZod {
  return async (app) => {
    app.post(
      '/v1/verdicts/lookup',
      {
        schema: {
          operationId: 'lookUpVerdicts',
          tags: ['catalogue'],
          summary: 'Look up the stored verdicts of many pairs',
          description: `For up to ${MOST_LOOKUPS} pairs of the catalogue. Judges nothing. Each pair has its own outcome; one that is not known keeps no other from being answered. Only verdicts of the pair by itself count: one kind of lamp, nothing added, judged no less strictly than by default.`,
          body: lookupRequest,
          response: {
            200: { description: 'One answer for each pair.', content: { 'application/json': { schema: lookupAnswer } } },
            ...problemResponses('invalid-request', 'malformed-json', 'body-too-large', 'unsupported-media-type', 'internal', 'stopping'),
          },
        },
      },
      async (request, reply) => reply.send({ items: lookUpVerdicts(dependencies, request.body) }),
    );
  };
}
