/**
 * Runs screenings one after the other. A screening is queued until it is its turn and its time; running or paused until every pairing
 * was looked at; then finished. Cancelled ends it from any of these. What was not finished when the process ended goes on first with
 * the next one.
 */
import type { ScreeningRow } from '../../db/screenings.ts';
import { MODEL_VERSION } from '../../model/index.ts';
import type { ScreeningRequest } from '../schemas/screening.ts';
import { diskTrouble } from './disk-trouble.ts';
import type { ScreeningDependencies } from './screening-dependencies.ts';
import { type RunPace, type ScreeningRun, startScreeningRun } from './screening-run.ts';
import { type Freezing, freezeSelection } from './selection-freezing.ts';

export interface ScreeningTurns {
  runOf(id: string): ScreeningRun | undefined;
  /** Begins the next screening where none runs. */
  advance(): void;
  start(): void;
  stop(): Promise<void>;
  idle(): Promise<void>;
}

/** ms before another try after a fault of ours, and where the record cannot be written */
const RETRY_AFTER_FAULT = 60_000;
const RETRY_AFTER_TROUBLE = 3_000;
/** ms; the longest that a timer can wait */
const LONGEST_TIMER = 2 ** 31 - 1;

export function screeningTurns(deps: ScreeningDependencies, pace: RunPace = {}): ScreeningTurns {
  const { screenings: store, queue, signals, now, logger } = deps;
  let current: ScreeningRun | undefined;
  let started = false;
  let timer: NodeJS.Timeout | undefined;
  let idleWaiters: (() => void)[] = [];

  const nextRow = (): ScreeningRow | undefined => {
    const unfinished = store.unfinished();
    const at = now().toISOString();
    return unfinished.find(({ state }) => state !== 'queued') ?? unfinished.find(({ start_at }) => start_at === null || start_at <= at);
  };

  const waitFor = (ms: number): void => {
    timer = setTimeout(advance, Math.min(LONGEST_TIMER, Math.max(1, ms)));
    timer.unref();
  };

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
      if (starts.length > 0) waitFor(Math.min(...starts) - now().getTime());
      for (const tell of idleWaiters) tell();
      idleWaiters = [];
    } catch (error) {
      const trouble = diskTrouble(error);
      logger.warn({ err: error, detail: trouble }, 'a screening could not begin');
      waitFor(trouble === undefined ? RETRY_AFTER_FAULT : RETRY_AFTER_TROUBLE);
    }
  };

  const begin = (row: ScreeningRow): void => {
    const begun = store.together(() => prepare(row));
    signals.tell(row.id);
    if (begun === undefined) {
      advance();
      return;
    }
    logger.info({ screening: row.id, total: begun.total, openPage: begun.open_page }, 'screening runs');
    const run = startScreeningRun(deps, begun, pace);
    current = run;
    void run.ended.then(
      (finished) => {
        if (finished) logger.info({ screening: run.id }, 'screening finished');
        current = undefined;
        advance();
      },
      (error) => {
        logger.warn({ err: error, screening: run.id }, 'screening failed');
        current = undefined;
        pauseForFault(run.id);
        if (started) waitFor(RETRY_AFTER_FAULT);
      },
    );
  };

  /** The row as it runs; undefined where there is nothing to run. */
  const prepare = (row: ScreeningRow): ScreeningRow | undefined => {
    const { seq } = row;
    const at = now().toISOString();
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
  };

  const freeze = (row: ScreeningRow, request: ScreeningRequest): Freezing =>
    'stale' in request ? { ok: true } : freezeSelection(deps, row, request);

  const pauseForFault = (id: string): void => {
    const row = store.find(id);
    if (row === undefined || row.ended_at !== null) return;
    const detail = 'Something went wrong in the service; its log says what. It is tried again after a minute.';
    const pause = JSON.stringify({ reason: 'internal-error', detail });
    try {
      store.change(row.seq, { state: 'paused', pause, detail, at: now().toISOString() });
    } catch (error) {
      logger.warn({ err: error, screening: id }, 'the state of a screening could not be written');
    }
    signals.tell(id);
  };

  return {
    runOf: (id) => (current?.id === id ? current : undefined),
    advance,
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
}
