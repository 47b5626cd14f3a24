/** Whether the process answers, and whether it can do its work. */
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import { z } from 'zod';
import type { AppDependencies } from '../app.ts';
import { sendProblem } from '../problem-replies.ts';
import { problemResponses } from '../schemas/problem.ts';

export function healthRoutes({ isRecordReadable }: Pick<AppDependencies, 'isRecordReadable'>): FastifyPluginAsyncZod {
  return async (app) => {
    app.get(
      '/health/live',
      {
        logLevel: 'warn',
        schema: {
          operationId: 'isLive',
          tags: ['operations'],
          summary: 'Whether the process answers',
          description: 'Answers while pairings are being judged, too: simulations run in threads of their own.',
          response: { 200: z.object({ status: z.literal('live') }).describe('It does.') },
        },
      },
      async () => ({ status: 'live' as const }),
    );

    app.get(
      '/health/ready',
      {
        logLevel: 'warn',
        schema: {
          operationId: 'isReady',
          tags: ['operations'],
          summary: 'Whether the service can judge and store',
          response: { 200: z.object({ status: z.literal('ready') }).describe('It can.'), ...problemResponses('not-ready') },
        },
      },
      async (_request, reply) => {
        if (app.isStopping) return sendProblem(reply, 'not-ready', 'The service is stopping.', { retryAfter_s: 5 });
        if (!isRecordReadable()) return sendProblem(reply, 'not-ready', 'The record cannot be read.', { retryAfter_s: 5 });
        return { status: 'ready' as const };
      },
    );
  };
}
