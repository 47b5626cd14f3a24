/** Judging a pairing, and reading stored verdicts. */
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import type { AppDependencies } from '../app.ts';
import type { Metrics } from '../metrics.ts';
import { sendProblem } from '../problem-replies.ts';
import { askedPairing } from '../schemas/pairing.ts';
import { problemResponses } from '../schemas/problem.ts';
import { BAD_CURSOR } from '../schemas/url-values.ts';
import { verdict } from '../schemas/verdict.ts';
import { verdictList, verdictListQuery, verdictParams } from '../schemas/verdict-calls.ts';
import { storedVerdict, verdictPage } from '../verdicts/stored-verdicts.ts';
import { verdictJudging } from '../verdicts/verdict-judging.ts';
import { replyToFailure } from './verdict-failures.ts';

export function verdictRoutes(dependencies: AppDependencies, metrics: Metrics): FastifyPluginAsyncZod {
  const { verdicts } = dependencies;
  const judge = verdictJudging(dependencies);
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
          body: askedPairing,
          response: {
            200: { description: 'The stored verdict of the same question.', content: { 'application/json': { schema: verdict } } },
            201: { description: 'A new verdict; `Location` is its address.', content: { 'application/json': { schema: verdict } } },
            ...problemResponses(
              'invalid-request',
              'malformed-json',
              'body-too-large',
              'unsupported-media-type',
              'phase-table-needs-fitting',
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

    app.get(
      '/v1/verdicts/:id',
      {
        schema: {
          operationId: 'readVerdict',
          tags: ['verdicts'],
          summary: 'Read a stored verdict',
          params: verdictParams,
          response: {
            200: { description: 'The verdict.', content: { 'application/json': { schema: verdict } } },
            ...problemResponses('invalid-request', 'verdict-not-found', 'internal', 'stopping'),
          },
        },
      },
      async (request, reply) => {
        const row = verdicts.findById(request.params.id);
        if (row === undefined) return replyToFailure(reply, { kind: 'verdict-not-found' });
        return reply.send(storedVerdict(row));
      },
    );

    app.get(
      '/v1/verdicts',
      {
        schema: {
          operationId: 'listVerdicts',
          tags: ['verdicts'],
          summary: 'List stored verdicts, newest first',
          querystring: verdictListQuery,
          response: {
            200: { description: 'One page.', content: { 'application/json': { schema: verdictList } } },
            ...problemResponses('invalid-request', 'internal', 'stopping'),
          },
        },
      },
      async (request, reply) => {
        const page = verdictPage(verdicts, request.query);
        if (!page.ok) return sendProblem(reply, 'invalid-request', 'One thing is wrong with it.', { issues: BAD_CURSOR });
        return reply.send({ items: page.items, nextCursor: page.nextCursor });
      },
    );
  };
}
