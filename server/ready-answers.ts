/**
 * Answers that were given before, given again in front of the application: the same bytes and headers for the same address, while they
 * hold. What makes an application pleasant to write costs more than such an answer; whatever is not ready goes on to the application.
 */
import type { IncomingMessage, ServerResponse } from 'node:http';
import type { FastifyReply, FastifyRequest } from 'fastify';
import type { App } from './app.ts';
import { matchesTag, tagOf } from './entity-tags.ts';
import { newRequestId } from './plugins/request-ids.ts';

export interface Answer {
  readonly type: string;
  readonly text: string;
  /** whether it is still what would be answered; asked each time before it is given again */
  readonly holds: () => boolean;
}

export interface ReadyAnswers {
  /** Sends an answer from a route's handler, or 304 to who has it, and keeps it for the next request of the same address. */
  send(request: FastifyRequest, reply: FastifyReply, answer: Answer): void;
  /** Answers a request with what is ready for it; undefined where nothing is, and nothing was done. */
  answer(request: IncomingMessage, response: ServerResponse): Answered | undefined;
}

export interface Answered {
  readonly route: string;
  readonly status: number;
}

interface Ready {
  readonly route: string;
  readonly bytes: Buffer;
  readonly tag: string;
  /** names and values in turns, all but the request's id */
  readonly headers: readonly string[];
  readonly headersOf304: readonly string[];
  readonly holds: () => boolean;
  /** asked for since it was kept, or since it was last spared */
  isAskedFor: boolean;
}

/** bytes in all; beyond, what was not asked for goes, the oldest first, and what was asked for is spared once */
const MOST_BYTES = 96 * 1024 * 1024;
/** bytes that an answer weighs beyond its own, about */
const OVERHEAD = 2_000;

export function readyAnswers(mostBytes = MOST_BYTES): ReadyAnswers {
  // In the order of keeping and sparing: a Map iterates in the order of insertion. An answer is only marked when it is given: moving it to
  // the end each time cost a tenth of giving it.
  const kept = new Map<string, Ready>();
  let weight = 0;
  const drop = (url: string, { bytes }: Ready): void => {
    kept.delete(url);
    weight -= bytes.length + OVERHEAD;
  };
  const put = (url: string, ready: Ready): void => {
    kept.set(url, ready);
    weight += ready.bytes.length + OVERHEAD;
  };
  const keep = (url: string, ready: Ready): void => {
    const before = kept.get(url);
    if (before !== undefined) drop(url, before);
    put(url, ready);
    for (const [oldest, old] of kept) {
      if (weight <= mostBytes) break;
      drop(oldest, old);
      if (!old.isAskedFor) continue;
      old.isAskedFor = false;
      put(oldest, old);
    }
  };

  return {
    send: (request, reply, { type, text, holds }) => {
      const bytes = Buffer.from(text);
      const tag = tagOf(bytes);
      reply.header('etag', tag);
      const route = request.routeOptions.url ?? 'none';
      const all = headersIn(reply);
      const headers = [...all.flat(), 'content-type', type, 'content-length', String(bytes.length)];
      const headersOf304 = all.filter(([name]) => NEEDED_WITH_304.has(name)).flat();
      keep(request.raw.url ?? '', { route, bytes, tag, headers, headersOf304, holds, isAskedFor: false });
      if (matchesTag(request.headers['if-none-match'], tag)) reply.code(304).send();
      else reply.type(type).send(bytes);
    },
    answer: (request, response) => {
      const { method, url = '' } = request;
      const ready = method === 'GET' ? kept.get(url) : undefined;
      if (ready === undefined) return undefined;
      if (!ready.holds()) {
        drop(url, ready);
        return undefined;
      }
      ready.isAskedFor = true;
      const { route, bytes, tag, headers, headersOf304 } = ready;
      const isKnown = matchesTag(request.headers['if-none-match'], tag);
      const status = isKnown ? 304 : 200;
      response.writeHead(status, [...(isKnown ? headersOf304 : headers), 'x-request-id', newRequestId(request)]);
      response.end(isKnown ? undefined : bytes);
      return { route, status };
    },
  };
}

/** A client that has the answer has its other headers too (RFC 9110, 15.4.5); these it may need to use what it has, or to keep it longer. */
const NEEDED_WITH_304 = new Set(['etag', 'cache-control', 'vary', 'access-control-allow-origin', 'cross-origin-resource-policy']);

function headersIn(reply: FastifyReply): readonly (readonly [name: string, value: string])[] {
  const headers = Object.entries(reply.getHeaders()).filter(([name, value]) => name !== 'x-request-id' && value !== undefined);
  return headers.map(([name, value]) => [name, String(value)]);
}

/** Puts ready answers before the application's own listener, from when it is ready until it is told to stop. */
export function answerInFront(app: App, ready: ReadyAnswers, count: (answered: Answered, seconds: number) => void): void {
  app.addHook('onReady', (done) => {
    const listeners = app.server.listeners('request') as ((request: IncomingMessage, response: ServerResponse) => void)[];
    app.server.removeAllListeners('request');
    app.server.on('request', (request, response) => {
      const began = performance.now();
      const answered = app.isStopping ? undefined : ready.answer(request, response);
      if (answered !== undefined) return count(answered, (performance.now() - began) / 1000);
      for (const listener of listeners) listener.call(app.server, request, response);
    });
    done();
  });
}
