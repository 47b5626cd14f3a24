/**
 * The one table of what can go wrong for a client: code, status, title, and when. Problem documents (RFC 9457), the OpenAPI responses
 * and the reference text come from it. What goes wrong inside has one code without particulars.
 */
import type { Issue } from './schemas/wire-parsing.ts';

interface ProblemKind {
  readonly status: number;
  readonly title: string;
  readonly when: string;
}

export const PROBLEMS = {
  'invalid-request': {
    status: 400,
    title: 'The request is not valid',
    when: 'a field is unknown, missing, of the wrong type, out of range or at odds with another; `issues` lists every one',
  },
  'malformed-json': {
    status: 400,
    title: 'The body is not JSON',
    when: 'the body is empty, cut off, not JSON, not UTF-8 or nested too deep; `detail` says where it breaks',
  },
  'unreadable-list': {
    status: 400,
    title: 'The list cannot be read',
    when: 'a list for import is cut off, is not text in the encoding that it says, or breaks the rules of its type; nothing of it is kept',
  },
  'malformed-http': { status: 400, title: 'The request is not HTTP as it should be', when: 'the URL or a header cannot be read' },
  'no-such-call': { status: 404, title: 'There is no such call', when: 'no call has this method and path' },
  'verdict-not-found': { status: 404, title: 'There is no such verdict', when: 'no verdict is stored under this id' },
  'entry-not-found': { status: 404, title: 'There is no such entry', when: 'the catalogue has no entry, or no revision, under this id' },
  'screening-not-found': { status: 404, title: 'There is no such screening', when: 'no screening is stored under this id' },
  'not-acceptable': {
    status: 406,
    title: 'The answer has no form that the request accepts',
    when: '`Accept` names none of the media types of the call',
  },
  'entry-was-changed': {
    status: 412,
    title: 'The entry is not as you expect it',
    when: '`If-Match` names another revision than the latest, or `If-None-Match: *` an entry that exists: read it again',
  },
  'body-too-large': { status: 413, title: 'The body is too large', when: 'the body exceeds 1 MiB, or 8 MiB for a profile' },
  'list-too-large': {
    status: 413,
    title: 'The list is too large',
    when: 'a list for import has too many bytes or rows, or one row is too long; nothing of it is kept',
  },
  'unsupported-media-type': {
    status: 415,
    title: 'The body has the wrong type',
    when: 'the body is of a type that the call does not read',
  },
  'entries-not-known': {
    status: 422,
    title: 'The pairing names an entry that the catalogue does not have',
    when: 'a `dimmerId` or a `lampId` of a pairing is not in the catalogue; `issues` says where',
  },
  'profile-not-fitted': {
    status: 422,
    title: 'The record cannot be fitted to a lamp',
    when: 'a phase table or scope record is valid, but no lamp of the model draws such a current, or a phase table’s power is not the rated one; `residual_pct` says how far the best fit is off',
  },
  'scope-record-unusable': {
    status: 422,
    title: 'The scope record cannot be used',
    when: 'a scope record is not what it should be; `fault` names what is wrong, `row` and `column` where',
  },
  'class-does-not-fit': {
    status: 422,
    title: 'No circuit of the class is like this lamp',
    when: 'no circuit of the class has the stated power and power factor; `powerFactors` is what its circuits have',
  },
  'pairing-cannot-be-simulated': {
    status: 422,
    title: 'This pairing cannot be simulated',
    when: 'every field is valid by itself, yet the circuit they make is outside what the model covers; `issues` says where',
  },
  'expectation-missing': {
    status: 428,
    title: 'Say which revision you change',
    when: 'an existing entry is changed without `If-Match`: send the ETag you read, or `*` to overwrite whatever is there',
  },
  internal: { status: 500, title: 'Something went wrong in the service', when: 'the fault is ours; quote `requestId` when you report it' },
  'queue-full': {
    status: 503,
    title: 'Too many pairings are waiting',
    when: 'the simulation queue is full; `Retry-After` says when to ask again',
  },
  'imports-busy': {
    status: 503,
    title: 'Other lists are being imported',
    when: 'as many lists as the service takes at once are on their way; `Retry-After` says when to ask again',
  },
  'record-unavailable': {
    status: 503,
    title: 'The record is not available',
    when: 'the disk that holds the record is full or in trouble, or another process holds it; nothing of the request is kept: ask again once that is over',
  },
  'not-ready': { status: 503, title: 'The service is not ready', when: 'the record cannot be read, or the service is stopping' },
  stopping: { status: 503, title: 'The service is stopping', when: 'the request arrived on an open connection while the service stops' },
} as const satisfies { readonly [code: string]: ProblemKind };

export type ProblemCode = keyof typeof PROBLEMS;

export interface Problem {
  readonly type: string;
  readonly title: string;
  readonly status: number;
  readonly detail: string;
  readonly issues?: readonly Issue[];
  readonly requestId?: string;
  /** what else the code's `when` speaks of */
  readonly [member: string]: unknown;
}

/** Enough to mend a file by; a body of nothing but errors must not become an answer many times its size. */
const MOST_ISSUES = 200;

export function problemType(code: ProblemCode): string {
  return `urn:holdfast:problem:${code}`;
}

export function problemDocument(
  code: ProblemCode,
  detail: string,
  requestId: string,
  issues?: readonly Issue[],
  members: object = {},
): Problem {
  const { status, title } = PROBLEMS[code];
  const left = (issues?.length ?? 0) - MOST_ISSUES;
  return {
    type: problemType(code),
    title,
    status,
    detail: left > 0 ? `${detail} The first ${MOST_ISSUES} are listed, ${left} more are not.` : detail,
    ...(issues === undefined ? {} : { issues: issues.slice(0, MOST_ISSUES) }),
    ...members,
    requestId,
  };
}

/** The table as the reference shows it. */
export function problemTable(): string {
  const rows = Object.entries(PROBLEMS).map(([code, { status, title, when }]) => `| ${status} | \`${code}\` | ${title} | ${when} |`);
  return ['| status | code | title | when |', '|---|---|---|---|', ...rows].join('\n');
}
