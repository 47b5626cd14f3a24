/** Putting, reading and deleting the catalogue's dimmers and lamps. */
import type { FastifyReply, FastifyRequest } from 'fastify';
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import type { EntryKind } from '../../db/entries.ts';
import type { AppDependencies } from '../app.ts';
import { deleteEntry, type EntryOf, putEntry, readEntry } from '../catalogue/entries.ts';
import { readExpectation, revisionTag, type Unmet } from '../catalogue/expectations.ts';
import { matchesTag } from '../entity-tags.ts';
import { sendProblem } from '../problem-replies.ts';
import { dimmerEntry, lampEntry, storedDimmer, storedLamp } from '../schemas/entry.ts';
import { entryParams, entryQuery } from '../schemas/entry-calls.ts';
import { noBody } from '../schemas/no-body.ts';
import { problemResponses } from '../schemas/problem.ts';

type Dependencies = Pick<AppDependencies, 'entries' | 'now'>;

const KINDS = {
  dimmer: { path: '/v1/dimmers/:id', name: 'Dimmer', body: dimmerEntry, stored: storedDimmer },
  lamp: { path: '/v1/lamps/:id', name: 'Lamp', body: lampEntry, stored: storedLamp },
} as const;

const PUT_DESCRIPTION =
  'Creates the entry, or makes a new revision of it where anything differs. A change to an existing entry needs `If-Match` with the ETag that was read, so that no edit by somebody else is lost, or `If-Match: *` to overwrite what is there; `If-None-Match: *` creates only. Verdicts stay tied to the revision they judged; they turn stale when the dimmer or the lamp itself is edited, not when only its texts are.';

export function entryRoutes(dependencies: Dependencies): FastifyPluginAsyncZod {
  return async (app) => {
    for (const kind of ['dimmer', 'lamp'] as const) {
      const { path, name, body, stored } = KINDS[kind];
      const documented = (operationId: string, summary: string) => ({
        operationId,
        tags: ['catalogue'],
        summary,
        params: entryParams(kind),
      });
      const answer = (description: string) => ({ description, content: { 'application/json': { schema: stored } } });

      app.put(
        path,
        {
          schema: {
            ...documented(`put${name}`, `Create or change a ${kind}`),
            description: PUT_DESCRIPTION,
            body,
            response: {
              200: answer('The entry, in a new revision, or unchanged where nothing differs.'),
              201: answer('The new entry; `Location` is its address.'),
              ...problemResponses(
                'invalid-request',
                'malformed-json',
                'entry-was-changed',
                'body-too-large',
                'unsupported-media-type',
                'expectation-missing',
                'internal',
                'stopping',
              ),
            },
          },
        },
        async (request, reply) => {
          const { id } = request.params;
          const put = putEntry(
            dependencies.entries,
            id,
            { kind, entry: request.body } as EntryOf,
            expectationOf(request),
            dependencies.now(),
          );
          if (!put.ok) return replyToUnmet(reply, put.failure);
          if (put.outcome === 'created') reply.code(201).header('location', path.replace(':id', id));
          return reply.header('etag', revisionTag(put.entry.revision)).send(put.entry as never);
        },
      );

      app.get(
        path,
        {
          schema: {
            ...documented(`read${name}`, `Read a ${kind}`),
            querystring: entryQuery,
            response: {
              200: answer('The entry; the ETag is its revision.'),
              304: noBody('It is still the revision that `If-None-Match` names.'),
              ...problemResponses('invalid-request', 'entry-not-found', 'internal', 'stopping'),
            },
          },
        },
        async (request, reply) => {
          const entry = readEntry(dependencies.entries, kind, request.params.id, request.query.revision);
          if (entry === undefined) return sendEntryNotFound(reply, kind);
          const tag = revisionTag(entry.revision);
          reply.header('etag', tag).header('cache-control', 'no-cache');
          if (matchesTag(request.headers['if-none-match'], tag)) return reply.code(304).send();
          return reply.send(entry as never);
        },
      );

      app.delete(
        path,
        {
          schema: {
            ...documented(`delete${name}`, `Delete a ${kind}`),
            description:
              'Takes it out of the catalogue. Its revisions and its verdicts stay readable, the verdicts as stale; put again, its numbering goes on. `If-Match` makes sure that it is the revision you know.',
            response: {
              204: noBody('It is deleted.'),
              ...problemResponses('invalid-request', 'entry-not-found', 'entry-was-changed', 'internal', 'stopping'),
            },
          },
        },
        async (request, reply) => {
          const { id } = request.params;
          const deleted = deleteEntry(dependencies.entries, kind, id, expectationOf(request), dependencies.now());
          if (deleted.ok) return reply.code(204).send();
          return deleted.failure.kind === 'entry-not-found' ? sendEntryNotFound(reply, kind) : replyToUnmet(reply, deleted.failure);
        },
      );
    }
  };
}

function expectationOf({ headers }: Pick<FastifyRequest, 'headers'>) {
  return readExpectation(headers['if-match'], headers['if-none-match']);
}

function sendEntryNotFound(reply: FastifyReply, kind: EntryKind): FastifyReply {
  return sendProblem(reply, 'entry-not-found', `The catalogue has no such ${kind}, or not this revision of it.`);
}

function replyToUnmet(reply: FastifyReply, unmet: Unmet): FastifyReply {
  if (unmet.kind === 'expectation-not-stated') {
    return sendProblem(
      reply,
      'expectation-missing',
      'The entry exists and differs from what you sent. Send If-Match with the ETag you read.',
    );
  }
  if (unmet.revision === undefined) return sendProblem(reply, 'entry-was-changed', 'There is no such entry now.');
  reply.header('etag', revisionTag(unmet.revision));
  return sendProblem(reply, 'entry-was-changed', `The latest revision is ${unmet.revision}. Read it, and decide again.`);
}
