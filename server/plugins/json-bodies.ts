/**
 * Reads bodies that are JSON. One that cannot be read is refused with the place where it breaks and what would be right there; nothing
 * of it is guessed, neither its encoding nor which of two fields of one name was meant.
 */
import type { FastifyRequest } from 'fastify';
import type { App } from '../app.ts';
import { jsonFaultWords } from '../json/json-fault.ts';
import { nestsDeeperThan } from '../json/nesting.ts';
import { repeatedFields } from '../json/repeated-fields.ts';
import { BodyRefused, RequestInvalid } from '../problem-replies.ts';

/** levels; several times what any body of a call has */
const DEEPEST = 64;

export function readJsonBodies(app: App): void {
  // Fastify reads text/plain by itself as well.
  app.removeAllContentTypeParsers();
  app.addContentTypeParser('application/json', { parseAs: 'buffer' }, async (request: FastifyRequest, body: Buffer) => {
    const encoding = request.headers['content-encoding'] ?? 'identity';
    if (encoding !== 'identity') throw new BodyRefused('unsupported-media-type', 'Send the body as application/json, not compressed.');
    return read(decode(body), request.routeOptions.schema?.body !== undefined);
  });
}

function read(text: string, isWanted: boolean): unknown {
  if (text === '') {
    // Many clients state a type with every request, also where a call takes no body.
    if (!isWanted) return undefined;
    throw new BodyRefused('malformed-json', 'The body is empty: send a JSON object.');
  }
  if (nestsDeeperThan(DEEPEST, text)) throw new BodyRefused('malformed-json', `The body nests more than ${DEEPEST} levels deep.`);
  const value = parse(text);
  const repeated = repeatedFields(text);
  if (repeated.length > 0) throw new RequestInvalid(repeated);
  return value;
}

function parse(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch (error) {
    if (!(error instanceof SyntaxError)) throw error;
    const where = jsonFaultWords(text) ?? error.message;
    throw new BodyRefused('malformed-json', `The body cannot be read as JSON. It breaks at ${where}.`);
  }
}

/** A byte order mark is skipped: some editors write one. */
function decode(body: Buffer): string {
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(body);
  } catch {
    throw new BodyRefused('malformed-json', 'The body is not text in UTF-8, as JSON is: save or send it as UTF-8.');
  }
}
