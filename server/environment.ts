/**
 * The environment, parsed once into one frozen object. Every variable starts with HOLDFAST_; one that is misspelt or out of range
 * stops the start, with all that is wrong listed. `.env.example` documents each, and a test holds the two together.
 */
import { availableParallelism } from 'node:os';
import { z } from 'zod';

const whole = (fallback: number, from: number, to: number) => {
  const error = `must be a whole number from ${from} to ${to}`;
  return z
    .string()
    .refine((text) => /^\d{1,9}$/.test(text), { error })
    .transform(Number)
    .pipe(z.int().min(from, { error }).max(to, { error }))
    .default(fallback);
};

const LEVELS = ['trace', 'debug', 'info', 'warn', 'error', 'fatal', 'silent'] as const;

const variables = z.strictObject({
  HOLDFAST_HOST: z.string().min(1, { error: 'must be a host name or an address' }).default('127.0.0.1'),
  HOLDFAST_PORT: whole(8080, 0, 65_535),
  HOLDFAST_DATA: z.string().min(1, { error: 'must be a folder' }).default('./data'),
  HOLDFAST_WORKERS: whole(Math.max(1, availableParallelism() - 1), 1, 256),
  HOLDFAST_QUEUE_LIMIT: whole(256, 1, 100_000),
  HOLDFAST_STOP_DEADLINE_S: whole(20, 1, 3600),
  HOLDFAST_PAIRING_DEADLINE_S: whole(600, 1, 86_400),
  HOLDFAST_CHUNK_LOCK_S: whole(30, 1, 3600),
  HOLDFAST_DAILY_RESCREENING: z
    .string()
    .regex(/^([01]\d|2[0-3]):[0-5]\d$/, { error: 'must be a time of the day in UTC, like 02:30' })
    .optional(),
  HOLDFAST_REDIS_URL: z.url({ protocol: /^rediss?$/, error: 'must be a URL like redis://127.0.0.1:6379' }).optional(),
  HOLDFAST_LOG_LEVEL: z.enum(LEVELS, { error: `must be one of ${LEVELS.join(', ')}` }).default('info'),
});

export const VARIABLE_NAMES: readonly string[] = Object.keys(variables.shape);

export interface Environment {
  readonly host: string;
  /** 0 takes any free port */
  readonly port: number;
  readonly dataFolder: string;
  readonly workers: number;
  readonly queueLimit: number;
  /** seconds that running requests are given when the service stops */
  readonly stopDeadline_s: number;
  /** seconds that a screened pairing is given before its thread is ended */
  readonly pairingDeadline_s: number;
  /** seconds without a sign of life after which a worker's chunk is given to another */
  readonly chunkLock_s: number;
  /** HH:MM, UTC; undefined: stale verdicts are not screened again by themselves */
  readonly dailyRescreening: string | undefined;
  /** may hold a password: never print it */
  readonly redisUrl: string | undefined;
  readonly logLevel: (typeof LEVELS)[number];
}

export type ParsedEnvironment =
  | { readonly ok: true; readonly environment: Environment }
  | { readonly ok: false; readonly problems: readonly string[] };

/** An empty variable counts as not set, as in a compose file that passes one on. */
export function parseEnvironment(from: { readonly [name: string]: string | undefined }): ParsedEnvironment {
  const ours = Object.entries(from).filter(([name, value]) => name.startsWith('HOLDFAST_') && value !== undefined && value !== '');
  const parsed = variables.safeParse(Object.fromEntries(ours));
  if (!parsed.success) return { ok: false, problems: parsed.error.issues.flatMap(problemsOf) };
  const set = parsed.data;
  const environment = {
    host: set.HOLDFAST_HOST,
    port: set.HOLDFAST_PORT,
    dataFolder: set.HOLDFAST_DATA,
    workers: set.HOLDFAST_WORKERS,
    queueLimit: set.HOLDFAST_QUEUE_LIMIT,
    stopDeadline_s: set.HOLDFAST_STOP_DEADLINE_S,
    pairingDeadline_s: set.HOLDFAST_PAIRING_DEADLINE_S,
    chunkLock_s: set.HOLDFAST_CHUNK_LOCK_S,
    dailyRescreening: set.HOLDFAST_DAILY_RESCREENING,
    redisUrl: set.HOLDFAST_REDIS_URL,
    logLevel: set.HOLDFAST_LOG_LEVEL,
  };
  return { ok: true, environment: Object.freeze(environment) };
}

function problemsOf(issue: z.core.$ZodIssue): readonly string[] {
  if (issue.code === 'unrecognized_keys') {
    return issue.keys.map((name) => `${name} is not a variable of this service; those are ${VARIABLE_NAMES.join(', ')}`);
  }
  return [`${issue.path.join('.')} ${issue.message}`];
}

/** The environment as the log shows it: a URL with a password loses it. */
export function printable(environment: Environment): { readonly [name: string]: unknown } {
  return { ...environment, redisUrl: environment.redisUrl === undefined ? 'unset' : 'set' };
}
