/** Which dimmers suit a lamp, and which lamps suit a dimmer. */
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import type { EntryKind } from '../../db/entries.ts';
import { type PartnerDependencies, partnerPage } from '../catalogue/partners.ts';
import { sendProblem } from '../problem-replies.ts';
import { entryParams } from '../schemas/entry-calls.ts';
import { partnerList, partnerQuery } from '../schemas/partner-calls.ts';
import { problemResponses } from '../schemas/problem.ts';
import { BAD_CURSOR } from '../schemas/url-values.ts';

export function partnerRoutes(dependencies: PartnerDependencies): FastifyPluginAsyncZod {
  return async (app) => {
    const list = (kind: EntryKind, path: string, operationId: string, summary: string) =>
      app.get(
        path,
        {
          schema: {
            operationId,
            tags: ['catalogue'],
            summary,
            description:
              'By stored verdicts of the pair by itself, of what the catalogue says now: one kind of lamp, nothing added, judged no less strictly than by default. Where a pair was judged more than once at the same count and mains, the newest verdict speaks.',
            params: entryParams(kind),
            querystring: partnerQuery,
            response: {
              200: { description: 'A page.', content: { 'application/json': { schema: partnerList } } },
              ...problemResponses('invalid-request', 'entry-not-found', 'internal', 'stopping'),
            },
          },
        },
        async (request, reply) => {
          const page = partnerPage(dependencies, kind, request.params.id, request.query);
          if (page.ok) return reply.send({ items: page.items, nextCursor: page.nextCursor });
          if (page.failure.kind === 'entry-not-found') {
            return sendProblem(reply, 'entry-not-found', `The catalogue has no such ${kind}.`);
          }
          return sendProblem(reply, 'invalid-request', 'One thing is wrong with it.', { issues: BAD_CURSOR });
        },
      );
    list('lamp', '/v1/lamps/:id/dimmers', 'listDimmersOfLamp', 'Which dimmers suit this lamp');
    list('dimmer', '/v1/dimmers/:id/lamps', 'listLampsOfDimmer', 'Which lamps suit this dimmer');
  };
}
