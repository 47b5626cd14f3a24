/**
 * Screenings as the service offers them: asked for, shown, cancelled, and run one after the other. A screening is queued until it is its
 * turn and its time; running or paused until every pairing was looked at; then finished. Cancelled ends it from any of these. What was
 * not finished when the process ended goes on by itself with the next one.
 */
import { randomBytes } from 'node:crypto';
import type { ScreeningRow } from '../../db/screenings.ts';
import { MODEL_VERSION } from '../../model/index.ts';
import type { AcceptedAnswer, AskedScreening, ScreeningAnswer, ScreeningRequest } from '../schemas/screening.ts';
import type { Issue } from '../schemas/wire-parsing.ts';
import { canonicalJson } from '../verdicts/canonical-inputs.ts';
import { diskTrouble } from './disk-trouble.ts';
import type { ScreeningDependencies } from './screening-dependencies.ts';
import { type RunPace, type ScreeningRun, startScreeningRun } from './screening-run.ts';
import { measuredCost } from './screening-speed.ts';
import { screeningToWire } from './screening-to-wire.ts';
import { type Freezing, freezeSelection } from './selection-freezing.ts';
import { countStored } from './stored-counting.ts';

export type ScreeningAsked =
  | { readonly ok: true; readonly screening: AcceptedAnswer }
  | { readonly ok: false; readonly issues: readonly Issue[] };

export interface Screenings {
  ask(asked: AskedScreening): Promise<ScreeningAsked>;
  read(id: string): Promise<ScreeningAnswer | undefined>;
  page(before: number, limit: number): Promise<readonly { readonly seq: number; readonly screening: ScreeningAnswer }[]>;
  /** What is done stays; undefined where there is no such screening. */
  cancel(id: string): Promise<ScreeningAnswer | undefined>;
  /** The run of a screening, where it runs now. */
  runOf(id: string): ScreeningRun | undefined;
  /** Goes on with what is unfinished, and from now on runs whatever is asked for. */
  start(): void;
  /** Lets what is under way be recorded; what is left goes on at the next start. */
  stop(): Promise<void>;
  /** Resolves when nothing runs and nothing can be begun now. */
  idle(): Promise<void>;
}

/** ms before another try after a fault of ours, and the longest a timer can wait */
const RETRY_AFTER_FAULT = 60_000;
const LONGEST_TIMER = 2 ** 31 - 1;
/** bytes of a random id, in hexadecimal 26 digits */
const ID_BYTES = 13;

export function screeningsOf(deps: ScreeningDependencies, pace: RunPace = {}): Screenings {
  const { screenings: store, queue, signals, now, logger } = deps;
  let current: ScreeningRun | undefined;
  let started = false;
  let timer: NodeJS.Timeout | undefined;
  let idleWaiters: (() => void)[] = [];

  const show = async (row: ScreeningRow, knownStored = 0): Promise<ScreeningAnswer> => {
    const run = current?.id === row.id ? current : undefined;
    const request = JSON.parse(row.request) as ScreeningRequest;
    return screeningToWire(row, {
      pause: run?.pause() ?? null,
      waitingFor: run === undefined || run.pause() !== null ? undefined : await queue.waitingFor(),
      perHour: run?.perHour() ?? null,
      cost: measuredCost(store, request),
      breadth: await queue.breadth(),
      knownStored,
      now: now(),
    });
  };

  const freeze = (row: ScreeningRow, request: ScreeningRequest): Freezing =>
    'stale' in request ? { ok: true } : freezeSelection(deps, row, request);

  const nextRow = (): ScreeningRow | undefined => {
    const unfinished = store.unfinished();
    const at = now().toISOString();
    return unfinished.find(({ state }) => state !== 'queued') ?? unfinished.find(({ start_at }) => start_at === null || start_at <= at);
  };

  /** Begins the next screening where none runs, or sets a timer for the one that is next. */
  const advance = (): void => {
    clearTimeout(timer);
    if (!started || current !== undefined) return;
    try {
      const row = nextRow();
      if (row !== undefined) {
        begin(row);
        return;
      }
      const starts = store.unfinished().flatMap(({ start_at }) => (start_at === null ? [] : [Date.parse(start_at)]));
      if (starts.length > 0) waitUntil(Math.min(...starts) - now().getTime());
      for (const tell of idleWaiters) tell();
      idleWaiters = [];
    } catch (error) {
      logger.warn({ err: error, detail: diskTrouble(error) }, 'a screening could not begin');
      waitUntil(diskTrouble(error) === undefined ? RETRY_AFTER_FAULT : 3_000);
    }
  };
  const waitUntil = (ms: number): void => {
    timer = setTimeout(advance, Math.min(LONGEST_TIMER, Math.max(1, ms)));
    timer.unref();
  };

  const begin = (row: ScreeningRow): void => {
    const { seq, id } = row;
    const at = now().toISOString();
    const begun = store.together(() => {
      // A scheduled screening takes the catalogue as it is when it begins.
      if (row.state === 'queued' && row.start_at !== null) {
        const frozen = freeze(row, JSON.parse(row.request) as ScreeningRequest);
        if (!frozen.ok) {
          const detail = frozen.issues.map(({ path, message }) => `${path} ${message}`).join('; ');
          store.change(seq, { state: 'cancelled', detail, at });
          return undefined;
        }
      }
      if (row.model_version !== MODEL_VERSION) store.reset(seq, MODEL_VERSION);
      if (row.state !== 'running') store.change(seq, { state: 'running', at });
      return store.findBySeq(seq);
    });
    signals.tell(id);
    if (begun === undefined) {
      advance();
      return;
    }
    logger.info({ screening: id, total: begun.total, openPage: begun.open_page }, 'screening runs');
    const run = startScreeningRun(deps, begun, pace);
    current = run;
    void run.ended.then(
      (finished) => end(run, finished, 0),
      (error) => {
        logger.warn({ err: error, screening: id }, 'screening failed');
        end(run, false, RETRY_AFTER_FAULT);
      },
    );
  };

  const end = (run: ScreeningRun, finished: boolean, retry_ms: number): void => {
    if (current === run) current = undefined;
    if (finished) logger.info({ screening: run.id }, 'screening finished');
    if (retry_ms === 0) {
      advance();
    } else {
      pauseForFault(run.id);
      if (started) waitUntil(retry_ms);
    }
  };

  const pauseForFault = (id: string): void => {
    const row = store.find(id);
    if (row === undefined || row.ended_at !== null) return;
    const detail = 'Something went wrong in the service; its log says what. It is tried again after a minute.';
    try {
      store.change(row.seq, {
        state: 'paused',
        pause: JSON.stringify({ reason: 'internal-error', detail }),
        detail,
        at: now().toISOString(),
      });
    } catch (error) {
      logger.warn({ err: error, screening: id }, 'the state of a screening could not be written');
    }
    signals.tell(id);
  };

  return {
    ask: async ({ startAt, ...request }) => {
      const accepted = accept(() => {
        const created = store.create({
          id: randomBytes(ID_BYTES).toString('hex'),
          request: canonicalJson(request),
          model_version: MODEL_VERSION,
          created_at: now().toISOString(),
          start_at: startAt === undefined ? null : new Date(startAt).toISOString(),
          listed: 0,
        });
        const { seq } = created;
        const frozen = freezeSelection(deps, created, request);
        if (!frozen.ok) throw new Refused(frozen.issues);
        store.change(seq, { state: 'queued', at: created.created_at });
        return store.findBySeq(seq) ?? created;
      });
      if (!accepted.ok) return accepted;
      const { row } = accepted;
      const foundStored = await countStored(deps, row, request);
      advance();
      const latest = store.findBySeq(row.seq) ?? row;
      return { ok: true, screening: { ...(await show(latest, foundStored.pairings)), foundStored } };
    },
    read: async (id) => {
      const row = store.find(id);
      return row === undefined ? undefined : show(row);
    },
    page: async (before, limit) =>
      Promise.all(store.page(before, limit).map(async (row) => ({ seq: row.seq, screening: await show(row) }))),
    cancel: async (id) => {
      const row = store.find(id);
      if (row === undefined) return undefined;
      if (row.ended_at === null) {
        if (current?.id === id) current.cancel();
        store.change(row.seq, { state: 'cancelled', at: now().toISOString() });
        signals.tell(id);
        await queue.forget(id);
      }
      return show(store.find(id) ?? row);
    },
    runOf: (id) => (current?.id === id ? current : undefined),
    start: () => {
      started = true;
      advance();
    },
    stop: async () => {
      started = false;
      clearTimeout(timer);
      current?.stop();
      await queue.close();
      await current?.ended.catch(() => false);
    },
    idle: () =>
      new Promise((resolve) => {
        idleWaiters.push(resolve);
        advance();
      }),
  };

  function accept(act: () => ScreeningRow): Accepted {
    try {
      return { ok: true, row: store.together(act) };
    } catch (error) {
      if (error instanceof Refused) return { ok: false, issues: error.issues };
      throw error;
    }
  }
}

type Accepted = { readonly ok: true; readonly row: ScreeningRow } | { readonly ok: false; readonly issues: readonly Issue[] };

/** Rolls the transaction of a screening back that selects nothing. */
class Refused extends Error {
  readonly issues: readonly Issue[];
  constructor(issues: readonly Issue[]) {
    super('The screening selects nothing.');
    this.issues = issues;
  }
}
