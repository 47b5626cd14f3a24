/** What streams from a screening: its progress as server-sent events, its results as NDJSON or CSV. */
import { Readable } from 'node:stream';
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import { z } from 'zod';
import { acceptedType } from '../accepted-type.ts';
import type { AppDependencies } from '../app.ts';
import { sendProblem } from '../problem-replies.ts';
import { noBody } from '../schemas/no-body.ts';
import { problemResponses } from '../schemas/problem.ts';
import { eventsHeaders, resultRow, screeningParams } from '../schemas/screening-calls.ts';
import { hasEventsAfter, screeningEvents } from '../screenings/screening-events.ts';
import { resultsCsv, resultsNdjson, screeningResults } from '../screenings/screening-results.ts';
import { sendScreeningNotFound } from './screenings.ts';

export function screeningStreamRoutes({ screening }: Pick<AppDependencies, 'screening'>): FastifyPluginAsyncZod {
  const { screenings, stores, signals } = screening;
  const sources = { screenings: stores.screenings, running: screenings, signals };
  return async (app) => {
    // Streams of events end when the service does; nothing else would end them.
    const stopping = new AbortController();
    app.addHook('preClose', async () => stopping.abort());

    app.get(
      '/v1/screenings/:id/events',
      {
        schema: {
          operationId: 'watchScreening',
          tags: ['screenings'],
          summary: 'The progress of a screening as server-sent events',
          description:
            'Events `state` (every change of state) and `progress` (counts and rate, at most two a second). Both carry an id: with `Last-Event-ID` the stream goes on after it. It ends with the screening; asked again then, the answer is 204, at which browsers stop asking.',
          params: screeningParams,
          headers: eventsHeaders,
          response: {
            200: { description: 'The stream.', content: { 'text/event-stream': { schema: z.string() } } },
            204: noBody('The screening has ended and everything was seen.'),
            ...problemResponses('invalid-request', 'screening-not-found', 'internal', 'stopping'),
          },
        },
      },
      async (request, reply) => {
        const { id } = request.params;
        const after = Number(request.headers['last-event-id'] ?? 0);
        if (stores.screenings.find(id) === undefined) return sendScreeningNotFound(reply);
        if (!hasEventsAfter(sources, id, after)) return reply.code(204).send();
        const signal = AbortSignal.any([request.signal, stopping.signal]);
        return reply
          .type('text/event-stream; charset=utf-8')
          .header('cache-control', 'no-store')
          .header('x-accel-buffering', 'no')
          .send(Readable.from(screeningEvents(sources, id, after, signal)) as never);
      },
    );

    app.get(
      '/v1/screenings/:id/results',
      {
        schema: {
          operationId: 'readScreeningResults',
          tags: ['screenings'],
          summary: 'What became of every pairing so far',
          description:
            'In the order lamps, dimmers, counts; also while the screening runs. NDJSON, or CSV where `Accept` prefers text/csv.',
          params: screeningParams,
          response: {
            200: {
              description: 'The results.',
              content: { 'application/x-ndjson': { schema: resultRow }, 'text/csv': { schema: z.string() } },
            },
            ...problemResponses('invalid-request', 'screening-not-found', 'not-acceptable', 'internal', 'stopping'),
          },
        },
      },
      async (request, reply) => {
        reply.header('vary', 'accept');
        const type = acceptedType(request.headers.accept, ['application/x-ndjson', 'text/csv']);
        if (type === undefined) return sendProblem(reply, 'not-acceptable', 'Accept application/x-ndjson or text/csv.');
        const { id } = request.params;
        const row = stores.screenings.find(id);
        if (row === undefined) return sendScreeningNotFound(reply);
        const results = screeningResults(stores, row);
        if (type === 'application/x-ndjson') {
          return reply.type('application/x-ndjson; charset=utf-8').send(Readable.from(resultsNdjson(results)) as never);
        }
        return reply
          .type('text/csv; charset=utf-8; header=present')
          .header('content-disposition', `attachment; filename="screening-${id}.csv"`)
          .send(Readable.from(resultsCsv(results)) as never);
      },
    );
  };
}
