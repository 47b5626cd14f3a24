/** Judging a pairing. */
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import type { AppDependencies } from '../app.ts';
import { judgingByReference } from '../catalogue/judging-by-reference.ts';
import type { Metrics } from '../metrics.ts';
import { referringPairing } from '../schemas/pairing.ts';
import { problemResponses } from '../schemas/problem.ts';
import { verdict } from '../schemas/verdict.ts';
import { verdictJudging } from '../verdicts/verdict-judging.ts';
import { replyToFailure } from './verdict-failures.ts';

export function verdictRoutes(dependencies: AppDependencies, metrics: Metrics): FastifyPluginAsyncZod {
  const judge = judgingByReference(dependencies, verdictJudging(dependencies));
  const given = metrics.counter('holdfast_verdicts_total', 'Verdicts given, by whether they were computed, shared or stored before.');
  const halfCycles = metrics.counter('holdfast_half_cycles_total', 'Half-cycles simulated for verdicts.');

  return async (app) => {
    app.post(
      '/v1/verdicts',
      {
        schema: {
          operationId: 'judgePairing',
          tags: ['verdicts'],
          summary: 'Judge a pairing',
          description:
            'Simulates the pairing over the dial and says whether it runs steadily. Takes from a fraction of a second to some seconds. The same question gets the stored verdict, also while it is still being judged for somebody else.',
          body: referringPairing,
          response: {
            200: { description: 'The stored verdict of the same question.', content: { 'application/json': { schema: verdict } } },
            201: { description: 'A new verdict; `Location` is its address.', content: { 'application/json': { schema: verdict } } },
            ...problemResponses(
              'invalid-request',
              'malformed-json',
              'body-too-large',
              'unsupported-media-type',
              'entries-not-known',
              'profile-not-fitted',
              'class-does-not-fit',
              'pairing-cannot-be-simulated',
              'internal',
              'queue-full',
              'stopping',
            ),
          },
        },
      },
      async (request, reply) => {
        const judged = await judge(request.body);
        if (!judged.ok) return replyToFailure(reply, judged.failure);
        given.add({ source: judged.source });
        halfCycles.add({}, judged.halfCycles);
        return reply
          .code(judged.source === 'computed' ? 201 : 200)
          .header('location', `/v1/verdicts/${judged.verdict.id}`)
          .send(judged.verdict);
      },
    );
  };
}
