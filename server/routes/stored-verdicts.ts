/** Reading stored verdicts: one, whole or in part, and pages of them as JSON or CSV. */
import type { FastifyReply, FastifyRequest } from 'fastify';
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import { z } from 'zod';
import { acceptedType } from '../accepted-type.ts';
import type { AppDependencies } from '../app.ts';
import { sendProblem } from '../problem-replies.ts';
import type { ReadyAnswers } from '../ready-answers.ts';
import { noBody } from '../schemas/no-body.ts';
import { problemResponses } from '../schemas/problem.ts';
import { BAD_CURSOR } from '../schemas/url-values.ts';
import { verdict } from '../schemas/verdict.ts';
import { verdictParams, verdictQuery } from '../schemas/verdict-calls.ts';
import { verdictList, verdictListQuery } from '../schemas/verdict-list.ts';
import { verdictText } from '../verdicts/verdict-answers.ts';
import { verdictsCsv } from '../verdicts/verdict-csv.ts';
import { headingPage, verdictPage } from '../verdicts/verdict-lists.ts';
import { replyToFailure } from './verdict-failures.ts';

const JSON_TYPE = 'application/json; charset=utf-8';

export function storedVerdictRoutes(dependencies: AppDependencies, ready: ReadyAnswers): FastifyPluginAsyncZod {
  return async (app) => {
    app.get(
      '/v1/verdicts/:id',
      {
        logLevel: 'warn',
        schema: {
          operationId: 'readVerdict',
          tags: ['verdicts'],
          summary: 'Read a stored verdict',
          description: 'A stored verdict never changes, so its ETag is good for as long as this version of the service runs.',
          params: verdictParams,
          querystring: verdictQuery,
          response: {
            200: {
              description: 'The verdict, or the fields of it that were asked for.',
              content: { 'application/json': { schema: verdict } },
            },
            304: noBody('It is what `If-None-Match` names.'),
            ...problemResponses('invalid-request', 'verdict-not-found', 'internal', 'stopping'),
          },
        },
      },
      (request, reply) => {
        const text = verdictText(dependencies.verdicts, request.params.id, request.query.fields);
        if (text === undefined) {
          replyToFailure(reply as FastifyReply, { kind: 'verdict-not-found' });
          return;
        }
        reply.header('cache-control', 'no-cache');
        ready.send(request as FastifyRequest, reply as FastifyReply, { type: JSON_TYPE, text, holds: () => true });
      },
    );

    app.get(
      '/v1/verdicts',
      {
        schema: {
          operationId: 'listVerdicts',
          tags: ['verdicts'],
          summary: 'List stored verdicts, newest first',
          description:
            'Every filter that is given must hold. As JSON, or as CSV where `Accept` prefers text/csv: a line for each entry a verdict was asked for, with the next page as a `Link`. Text in a CSV that a spreadsheet would run as a formula has a quote put before it.',
          querystring: verdictListQuery,
          response: {
            200: {
              description: 'One page.',
              content: { 'application/json': { schema: verdictList }, 'text/csv': { schema: z.string() } },
            },
            ...problemResponses('invalid-request', 'not-acceptable', 'internal', 'stopping'),
          },
        },
      },
      async (request, reply) => {
        reply.header('vary', 'accept');
        const type = acceptedType(request.headers.accept, ['application/json', 'text/csv']);
        if (type === undefined) return sendProblem(reply, 'not-acceptable', 'Accept application/json or text/csv.');
        if (type === 'application/json') {
          const page = verdictPage(dependencies, request.query);
          return page.ok ? reply.send({ items: page.items, nextCursor: page.nextCursor }) : sendBadCursor(reply);
        }
        if (request.query.fields !== undefined) {
          const issues = [{ path: 'fields', message: 'must be absent where a CSV is asked for: its columns are fixed' }];
          return sendProblem(reply, 'invalid-request', 'One thing is wrong with it.', { issues });
        }
        const page = headingPage(dependencies, request.query);
        if (!page.ok) return sendBadCursor(reply);
        if (page.nextCursor !== null) reply.header('link', `<${nextAddress(request.url, page.nextCursor)}>; rel="next"`);
        return reply
          .type('text/csv; charset=utf-8; header=present')
          .header('content-disposition', 'attachment; filename="verdicts.csv"')
          .send(verdictsCsv(page.items));
      },
    );
  };
}

function sendBadCursor(reply: FastifyReply): FastifyReply {
  return sendProblem(reply, 'invalid-request', 'One thing is wrong with it.', { issues: BAD_CURSOR });
}

function nextAddress(url: string, cursor: string): string {
  const [path = '', query = ''] = url.split('?');
  const parameters = new URLSearchParams(query);
  parameters.set('cursor', cursor);
  return `${path}?${parameters}`;
}
