/** Gives every request an id that the log, the answer's X-Request-Id and a problem document share. */
import { randomUUID } from 'node:crypto';
import type { IncomingMessage } from 'node:http';
import type { App } from '../app.ts';

/** What a caller may send as its own id: short and of harmless characters, since it goes to the log. */
const HARMLESS = /^[\w.-]{1,64}$/;

export function newRequestId(request: Pick<IncomingMessage, 'headers'>): string {
  const sent = request.headers['x-request-id'];
  return typeof sent === 'string' && HARMLESS.test(sent) ? sent : randomUUID();
}

export function identifyRequests(app: App): void {
  app.addHook('onRequest', async (request, reply) => {
    reply.header('x-request-id', request.id);
  });
}
