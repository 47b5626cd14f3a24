/** Lists of the catalogue's dimmers and lamps. */
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import type { EntryKind } from '../../db/entries.ts';
import type { AppDependencies } from '../app.ts';
import { entryPage } from '../catalogue/entry-lists.ts';
import { sendProblem } from '../problem-replies.ts';
import { entryList, entryListQuery } from '../schemas/entry-calls.ts';
import { problemResponses } from '../schemas/problem.ts';
import { BAD_CURSOR } from '../schemas/url-values.ts';

export function entryListRoutes({ entrySearch }: Pick<AppDependencies, 'entrySearch'>): FastifyPluginAsyncZod {
  return async (app) => {
    const list = (kind: EntryKind, path: string, operationId: string) =>
      app.get(
        path,
        {
          schema: {
            operationId,
            tags: ['catalogue'],
            summary: `List and search ${kind}s`,
            description: 'In the order of ids. Every filter that is given must hold.',
            querystring: entryListQuery(kind),
            response: {
              200: { description: 'A page.', content: { 'application/json': { schema: entryList } } },
              ...problemResponses('invalid-request', 'internal', 'stopping'),
            },
          },
        },
        async (request, reply) => {
          const page = entryPage(entrySearch, kind, request.query);
          if (!page.ok) return sendProblem(reply, 'invalid-request', 'One thing is wrong with it.', { issues: BAD_CURSOR });
          return reply.send({ items: page.items, nextCursor: page.nextCursor });
        },
      );
    list('dimmer', '/v1/dimmers', 'listDimmers');
    list('lamp', '/v1/lamps', 'listLamps');
  };
}
