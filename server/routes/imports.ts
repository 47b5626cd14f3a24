/** Importing lists of lamps and dimmers: the list streams in, what became of each row streams out. */
import type { IncomingMessage } from 'node:http';
import type { FastifyReply, FastifyRequest } from 'fastify';
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import { z } from 'zod';
import type { AppDependencies } from '../app.ts';
import { importing } from '../imports/importing.ts';
import { LIST_TYPES, type ListType, listRows } from '../imports/list-rows.ts';
import { replyToError, sendProblem } from '../problem-replies.ts';
import { importedRow, importQuery, importSummary } from '../schemas/import-calls.ts';
import { importBody } from '../schemas/import-lists.ts';
import { problemResponses } from '../schemas/problem.ts';

type Dependencies = Pick<AppDependencies, 'entries' | 'importStaging' | 'importLimits' | 'logger' | 'now'>;

const DESCRIPTION =
  'Puts every row as `PUT` would, overwriting what is there; rows that change nothing make no revision. The list is read whole before the catalogue is touched: one that is cut off, too long or not what its type says is refused and changes nothing, whatever `onError` says. The answer has a line for each row in the list’s order, and ends with a summary; without the summary it is not whole. A list that was taken in is finished even where the client goes away or the service is killed and started again.';

const SEND_AS = `Send the list as ${LIST_TYPES.slice(0, -1).join(', ')} or ${LIST_TYPES.at(-1)}, not compressed.`;

export function importRoutes({ entries, importStaging, importLimits, logger, now }: Dependencies): FastifyPluginAsyncZod {
  const imports = importing({ entries, staging: importStaging, limits: importLimits, log: logger, now });

  return async (app) => {
    app.addHook('onClose', imports.settled);
    // Here a body of these types is a stream: nothing of it is parsed, or limited, before the reader does it.
    app.removeContentTypeParser('application/json');
    app.addContentTypeParser([...LIST_TYPES], (_request, body, done) => done(null, body));
    app.setErrorHandler<Parameters<typeof replyToError>[0]>((error, request, reply) =>
      'code' in error && error.code === 'FST_ERR_CTP_INVALID_MEDIA_TYPE'
        ? sendProblem(reply, 'unsupported-media-type', SEND_AS)
        : replyToError(error, request, reply),
    );

    for (const kind of ['lamp', 'dimmer'] as const) {
      app.post(
        `/v1/imports/${kind}s`,
        {
          schema: {
            operationId: kind === 'lamp' ? 'importLamps' : 'importDimmers',
            tags: ['catalogue'],
            summary: `Import a list of ${kind}s`,
            description: DESCRIPTION,
            querystring: importQuery,
            consumes: [...LIST_TYPES],
            body: importBody(kind),
            response: {
              200: {
                description: 'What became of each row, and a summary.',
                content: { 'application/x-ndjson': { schema: z.union([importedRow, importSummary]).describe('One line of the answer.') } },
              },
              ...problemResponses(
                'invalid-request',
                'unreadable-list',
                'list-too-large',
                'unsupported-media-type',
                'internal',
                'imports-busy',
                'stopping',
              ),
            },
          },
        },
        async (request, reply) => {
          const { onError, dryRun, decimal } = request.query;
          const sent = sentList(request);
          if (sent === undefined) return sendProblem(reply, 'unsupported-media-type', SEND_AS);
          const rows = listRows(sent, kind, importLimits, decimal);
          const imported = await imports.importList(kind, rows, { onError, dryRun: dryRun === 'true' });
          throwAwayRest(request.raw);
          if (imported.ok) return reply.type('application/x-ndjson; charset=utf-8').send(imported.report as never);
          return replyToRefusal(reply, imported.failure);
        },
      );
    }
  };
}

function sentList({ headers, body }: FastifyRequest) {
  const [type = '', ...parameters] = (headers['content-type'] ?? '').split(';').map((part) => part.trim());
  const known = LIST_TYPES.find((listType) => listType === type.toLowerCase());
  const encoding = headers['content-encoding'] ?? 'identity';
  if (known === undefined || encoding !== 'identity' || body === undefined || body === null) return undefined;
  const charset = parameters.find((parameter) => /^charset=/i.test(parameter))?.slice('charset='.length);
  // Left open where reading ends early: closing it would close the connection that the answer goes out on.
  const bytes = (body as IncomingMessage).iterator({ destroyOnReturn: false }) as AsyncIterable<Uint8Array>;
  return { type: known satisfies ListType, charset: charset?.replace(/^"(.*)"$/, '$1'), bytes };
}

/**
 * Where reading ended early, what still arrives is read and dropped: many a client looks at the answer only when all is sent. A reader
 * that is still waiting for more keeps the stream from flowing, so its listener goes first.
 */
function throwAwayRest(request: IncomingMessage): void {
  request.removeAllListeners('readable');
  request.resume();
}

type Refusal = Extract<Awaited<ReturnType<ReturnType<typeof importing>['importList']>>, { ok: false }>['failure'];

function replyToRefusal(reply: FastifyReply, refusal: Refusal): FastifyReply {
  if (refusal.code === 'imports-busy') {
    return sendProblem(reply, 'imports-busy', 'Send the list again when one of the others is done.', { retryAfter_s: 5 });
  }
  const { code, message, issues } = refusal;
  return sendProblem(reply, code, message, issues === undefined ? {} : { issues });
}
