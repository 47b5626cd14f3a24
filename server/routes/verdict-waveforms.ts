/** Waveforms of a stored verdict, as JSON columns or as CSV. */
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import { z } from 'zod';
import { acceptedType } from '../accepted-type.ts';
import type { AppDependencies } from '../app.ts';
import { sendProblem } from '../problem-replies.ts';
import { problemResponses } from '../schemas/problem.ts';
import { verdictParams, waveforms, waveformsQuery } from '../schemas/verdict-calls.ts';
import { verdictWaveforms, waveformsCsv } from '../verdicts/verdict-waveforms.ts';
import { replyToFailure } from './verdict-failures.ts';

export function verdictWaveformRoutes(dependencies: AppDependencies): FastifyPluginAsyncZod {
  return async (app) => {
    app.get(
      '/v1/verdicts/:id/waveforms',
      {
        schema: {
          operationId: 'readWaveforms',
          tags: ['verdicts'],
          summary: 'Waveforms at one dial position',
          description:
            'Simulates the stored pairing again, by the present model version, and records the last observed half-cycles: columns of equal length as JSON, or lines of the same columns as CSV where `Accept` prefers text/csv.',
          params: verdictParams,
          querystring: waveformsQuery,
          response: {
            200: {
              description: 'The waveforms.',
              content: { 'application/json': { schema: waveforms }, 'text/csv': { schema: z.string() } },
            },
            ...problemResponses(
              'invalid-request',
              'verdict-not-found',
              'not-acceptable',
              'pairing-cannot-be-simulated',
              'internal',
              'queue-full',
              'stopping',
            ),
          },
        },
      },
      async (request, reply) => {
        reply.header('vary', 'accept');
        const type = acceptedType(request.headers.accept, ['application/json', 'text/csv']);
        if (type === undefined) return sendProblem(reply, 'not-acceptable', 'Accept application/json or text/csv.');
        const recorded = await verdictWaveforms(dependencies, { id: request.params.id, ...request.query });
        if (!recorded.ok) return replyToFailure(reply, recorded.failure);
        if (type === 'application/json') return reply.type('application/json; charset=utf-8').send(recorded.waveforms);
        const name = `waveforms-${request.params.id}-${request.query.sweep}-${request.query.dial_pct}.csv`;
        return reply
          .type('text/csv; charset=utf-8; header=present')
          .header('content-disposition', `attachment; filename="${name}"`)
          .send(waveformsCsv(recorded.waveforms));
      },
    );
  };
}
