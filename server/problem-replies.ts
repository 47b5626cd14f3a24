/** Sends problem documents, and turns every error that Fastify or a handler raises into one. */
import type { FastifyBaseLogger, FastifyError, FastifyReply, FastifyRequest } from 'fastify';
import { PROBLEMS, type ProblemCode, problemDocument } from './problems.ts';
import type { Issue } from './schemas/wire-parsing.ts';
import { diskTrouble } from './screenings/disk-trouble.ts';

/** Raised by the validator: everything that is wrong with one part of a request. */
export class RequestInvalid extends Error {
  readonly issues: readonly Issue[];
  constructor(issues: readonly Issue[]) {
    super('The request is not valid.');
    this.issues = issues;
  }
}

/** Raised where a body is read: it cannot be, for the reason in `message`. */
export class BodyRefused extends Error {
  readonly problem: ProblemCode;
  constructor(problem: ProblemCode, message: string) {
    super(message);
    this.problem = problem;
  }
}

/** s; somebody has to make room */
const DISK_RETRY = 60;

interface Extras {
  readonly issues?: readonly Issue[];
  readonly retryAfter_s?: number;
  /** further members of the document, by the names that the table of problems uses */
  readonly members?: object;
}

export function sendProblem(reply: FastifyReply, code: ProblemCode, detail: string, extras: Extras = {}): FastifyReply {
  if (extras.retryAfter_s !== undefined) reply.header('retry-after', extras.retryAfter_s);
  const document = problemDocument(code, detail, reply.request.id, extras.issues, extras.members);
  // As text: a problem must reach the client even where the call's response schemas have no place for it.
  return reply.code(PROBLEMS[code].status).type('application/problem+json').send(JSON.stringify(document));
}

const CODES_OF_FASTIFY: { readonly [code: string]: readonly [ProblemCode, string] } = {
  FST_ERR_CTP_INVALID_MEDIA_TYPE: ['unsupported-media-type', 'Send the body as application/json.'],
  FST_ERR_CTP_INVALID_CONTENT_LENGTH: ['malformed-http', 'The body is not as long as Content-Length says.'],
  FST_ERR_BAD_URL: ['malformed-http', 'The URL cannot be decoded.'],
};

export function replyToError(
  error: FastifyError | RequestInvalid | BodyRefused,
  request: FastifyRequest,
  reply: FastifyReply,
): FastifyReply {
  if (error instanceof RequestInvalid) {
    const count = error.issues.length;
    const detail = count === 1 ? 'One thing is wrong with it.' : `${count} things are wrong with it.`;
    return sendProblem(reply, 'invalid-request', detail, { issues: error.issues });
  }
  if (error instanceof BodyRefused) return sendProblem(reply, error.problem, error.message);
  if (error.code === 'FST_ERR_CTP_BODY_TOO_LARGE') {
    return sendProblem(reply, 'body-too-large', `Send at most ${request.routeOptions.bodyLimit.toLocaleString('en')} bytes.`);
  }
  const [code, detail] = CODES_OF_FASTIFY[error.code] ?? [];
  if (code !== undefined && detail !== undefined) return sendProblem(reply, code, detail);
  if (error.statusCode !== undefined && error.statusCode >= 400 && error.statusCode < 500) {
    request.log.warn({ err: error }, 'request refused');
    return sendProblem(reply, 'malformed-http', 'The request cannot be read.');
  }
  request.log.error({ err: error }, 'request failed');
  const trouble = diskTrouble(error);
  if (trouble !== undefined) {
    return sendProblem(reply, 'record-unavailable', `${trouble} Nothing of the request is kept.`, { retryAfter_s: DISK_RETRY });
  }
  return sendProblem(reply, 'internal', 'The request could not be answered. It is logged under requestId.');
}

/** The answer to bytes that are not HTTP at all, below any route. */
export function clientErrorText(log: FastifyBaseLogger, error: Error & { readonly code?: string }): string {
  log.debug({ err: error }, 'connection refused');
  const body = JSON.stringify(problemDocument('malformed-http', 'The request cannot be read as HTTP.', 'none'));
  return `HTTP/1.1 400 Bad Request\r\nContent-Type: application/problem+json\r\nContent-Length: ${Buffer.byteLength(body)}\r\nConnection: close\r\n\r\n${body}`;
}
