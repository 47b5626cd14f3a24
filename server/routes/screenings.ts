/** Asking for screenings, reading how they stand, and cancelling them. Their events and results are screening-streams.ts. */
import type { FastifyReply } from 'fastify';
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import type { AppDependencies } from '../app.ts';
import { sendProblem } from '../problem-replies.ts';
import { problemResponses } from '../schemas/problem.ts';
import { acceptedScreening, askedScreening, screening as screeningAnswer } from '../schemas/screening.ts';
import { screeningList, screeningListQuery, screeningParams } from '../schemas/screening-calls.ts';
import { BAD_CURSOR } from '../schemas/url-values.ts';
import { screeningPage } from '../screenings/screening-lists.ts';

export function screeningRoutes({ screening: { screenings } }: Pick<AppDependencies, 'screening'>): FastifyPluginAsyncZod {
  return async (app) => {
    app.post(
      '/v1/screenings',
      {
        schema: {
          operationId: 'askScreening',
          tags: ['screenings'],
          summary: 'Judge a lamp list against a shelf of dimmers',
          description:
            'Takes every selected lamp with every selected dimmer at every count, and judges what is not stored yet in the background, behind every question that somebody waits for. One screening runs at a time, in the order of asking. It survives a restart of the service.',
          body: askedScreening,
          response: {
            202: {
              description: 'It was accepted; `Location` is its address.',
              content: { 'application/json': { schema: acceptedScreening } },
            },
            ...problemResponses('invalid-request', 'malformed-json', 'body-too-large', 'unsupported-media-type', 'internal', 'stopping'),
          },
        },
      },
      async (request, reply) => {
        const asked = await screenings.ask(request.body);
        if (!asked.ok) {
          const { issues } = asked;
          return sendProblem(
            reply,
            'invalid-request',
            issues.length === 1 ? 'One thing is wrong with it.' : `${issues.length} things are wrong with it.`,
            { issues },
          );
        }
        return reply.code(202).header('location', `/v1/screenings/${asked.screening.id}`).send(asked.screening);
      },
    );

    app.get(
      '/v1/screenings',
      {
        schema: {
          operationId: 'listScreenings',
          tags: ['screenings'],
          summary: 'List screenings, newest first',
          querystring: screeningListQuery,
          response: {
            200: { description: 'One page.', content: { 'application/json': { schema: screeningList } } },
            ...problemResponses('invalid-request', 'internal', 'stopping'),
          },
        },
      },
      async (request, reply) => {
        const page = await screeningPage(screenings, request.query);
        if (!page.ok) return sendProblem(reply, 'invalid-request', 'One thing is wrong with it.', { issues: BAD_CURSOR });
        return reply.send({ items: page.items, nextCursor: page.nextCursor });
      },
    );

    app.get(
      '/v1/screenings/:id',
      {
        schema: {
          operationId: 'readScreening',
          tags: ['screenings'],
          summary: 'How a screening stands',
          params: screeningParams,
          response: {
            200: { description: 'The screening.', content: { 'application/json': { schema: screeningAnswer } } },
            ...problemResponses('invalid-request', 'screening-not-found', 'internal', 'stopping'),
          },
        },
      },
      async (request, reply) => {
        const found = await screenings.read(request.params.id);
        return found === undefined ? sendScreeningNotFound(reply) : reply.send(found);
      },
    );

    app.delete(
      '/v1/screenings/:id',
      {
        schema: {
          operationId: 'cancelScreening',
          tags: ['screenings'],
          summary: 'Cancel a screening',
          description: 'What is done stays, with its results. A screening that has ended is left as it is.',
          params: screeningParams,
          response: {
            200: { description: 'The screening, cancelled or ended before.', content: { 'application/json': { schema: screeningAnswer } } },
            ...problemResponses('invalid-request', 'screening-not-found', 'internal', 'stopping'),
          },
        },
      },
      async (request, reply) => {
        const cancelled = await screenings.cancel(request.params.id);
        return cancelled === undefined ? sendScreeningNotFound(reply) : reply.send(cancelled);
      },
    );
  };
}

export function sendScreeningNotFound(reply: FastifyReply): FastifyReply {
  return sendProblem(reply, 'screening-not-found', 'There is no screening under this id.');
}
