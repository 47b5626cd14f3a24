/**
 * Behaviour from the moment the application is told to close: what runs is answered, what still arrives on open connections is
 * refused, and every connection is closed with its answer, since a kept-alive one would hold the close back.
 */
import type { App } from '../app.ts';
import { sendProblem } from '../problem-replies.ts';

declare module 'fastify' {
  interface FastifyInstance {
    isStopping: boolean;
  }
}

export function refuseWhileStopping(app: App): void {
  app.decorate('isStopping', false);
  app.addHook('preClose', async () => {
    app.isStopping = true;
  });
  app.addHook('onRequest', async (request, reply) => {
    if (!app.isStopping || request.url.startsWith('/health/')) return;
    await sendProblem(reply, 'stopping', 'Ask again on a new connection; another instance may answer.', { retryAfter_s: 1 });
  });
  app.addHook('onSend', async (_request, reply) => {
    if (app.isStopping) reply.header('connection', 'close');
  });
}
