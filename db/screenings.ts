/**
 * The statements over screenings: the row of each with its counts, its changes of state, and the pairings it gave up. What a screening
 * selects is screening-selection.ts, what became of each pairing screening-pages.ts.
 */
import type { RecordDatabase } from './record.ts';

export type ScreeningState = 'queued' | 'running' | 'paused' | 'finished' | 'cancelled';

export interface ScreeningRow {
  readonly seq: number;
  readonly id: string;
  readonly state: ScreeningState;
  readonly pause: string | null;
  readonly request: string;
  readonly model_version: string;
  readonly created_at: string;
  readonly start_at: string | null;
  readonly started_at: string | null;
  readonly ended_at: string | null;
  readonly listed: number;
  readonly lamps: number;
  readonly dimmers: number;
  readonly total: number;
  readonly stored: number;
  readonly done: number;
  readonly failed: number;
  readonly open_page: number;
  readonly judging_ms: number;
  readonly revision: number;
}

export type NewScreening = Pick<ScreeningRow, 'id' | 'request' | 'model_version' | 'created_at' | 'start_at' | 'listed'>;

export interface ScreeningProgress {
  readonly stored: number;
  readonly done: number;
  readonly failed: number;
  readonly judging_ms: number;
  readonly open_page: number;
}

export interface FailureRow {
  readonly position: number;
  readonly kind: string;
  readonly detail: string;
  readonly attempts: number;
  readonly pairing: string;
}

export interface ScreeningEventRow {
  readonly revision: number;
  readonly at: string;
  readonly state: ScreeningState;
  readonly detail: string | null;
}

export interface StateChange {
  readonly state: ScreeningState;
  /** why, where it pauses */
  readonly pause?: string;
  readonly detail?: string;
  readonly at: string;
}

export interface ScreeningStore {
  /** Runs `act` as one immediate transaction: all of it is stored or nothing. May be nested. */
  together<T>(act: () => T): T;
  create(screening: NewScreening): ScreeningRow;
  find(id: string): ScreeningRow | undefined;
  findBySeq(seq: number): ScreeningRow | undefined;
  /** Up to `limit` with a seq below `before`, newest first. */
  page(before: number, limit: number): readonly ScreeningRow[];
  /** Everything that has not ended, in the order of asking. */
  unfinished(): readonly ScreeningRow[];
  /** How much the selection holds. */
  resize(seq: number, size: { readonly lamps: number; readonly dimmers: number; readonly total: number }): void;
  /** Adds to the counts; the revision rises. */
  progress(seq: number, added: ScreeningProgress): void;
  /** Writes the state and its event; the revision rises. */
  change(seq: number, change: StateChange): void;
  /** Forgets what became of every pairing, for a beginning anew under another model version. */
  reset(seq: number, modelVersion: string): void;
  addFailure(seq: number, failure: FailureRow): void;
  failuresBetween(seq: number, from: number, to: number): readonly FailureRow[];
  eventsAfter(seq: number, revision: number): readonly ScreeningEventRow[];
  /** What the latest screenings under a model version needed: ms of judging and pairings judged. */
  measured(modelVersion: string): readonly Pick<ScreeningRow, 'request' | 'judging_ms' | 'done'>[];
}

const COLUMNS =
  'seq, id, state, pause, request, model_version, created_at, start_at, started_at, ended_at, listed, lamps, dimmers, total, stored, done, failed, open_page, judging_ms, revision';

/** screenings that an estimate looks back on */
const MEASURED = 8;

export function screeningStore(record: RecordDatabase): ScreeningStore {
  const insert = record.prepare(
    `INSERT INTO screenings (id, state, request, model_version, created_at, start_at, listed, lamps, dimmers, total)
     VALUES (@id, 'queued', @request, @model_version, @created_at, @start_at, @listed, 0, 0, 0)`,
  );
  const byId = record.prepare<[string], ScreeningRow>(`SELECT ${COLUMNS} FROM screenings WHERE id = ?`);
  const bySeq = record.prepare<[number | bigint], ScreeningRow>(`SELECT ${COLUMNS} FROM screenings WHERE seq = ?`);
  const page = record.prepare<[number, number], ScreeningRow>(`SELECT ${COLUMNS} FROM screenings WHERE seq < ? ORDER BY seq DESC LIMIT ?`);
  const unfinished = record.prepare<[], ScreeningRow>(
    `SELECT ${COLUMNS} FROM screenings WHERE state IN ('queued', 'running', 'paused') ORDER BY seq`,
  );
  const resize = record.prepare('UPDATE screenings SET lamps = @lamps, dimmers = @dimmers, total = @total WHERE seq = @seq');
  const progress = record.prepare(
    `UPDATE screenings SET stored = stored + @stored, done = done + @done, failed = failed + @failed,
     judging_ms = judging_ms + @judging_ms, open_page = @open_page, revision = revision + 1 WHERE seq = @seq`,
  );
  const change = record.prepare<[object], { revision: number }>(
    `UPDATE screenings SET state = @state, pause = @pause, revision = revision + 1,
       started_at = CASE WHEN @state = 'running' THEN coalesce(started_at, @at) ELSE started_at END,
       ended_at = CASE WHEN @state IN ('finished', 'cancelled') THEN @at ELSE NULL END
     WHERE seq = @seq RETURNING revision`,
  );
  const insertEvent = record.prepare(
    'INSERT INTO screening_events (screening, revision, at, state, detail) VALUES (@seq, @revision, @at, @state, @detail)',
  );
  const reset = record.prepare(
    `UPDATE screenings SET stored = 0, done = 0, failed = 0, open_page = 0, judging_ms = 0, model_version = @modelVersion,
     revision = revision + 1 WHERE seq = @seq`,
  );
  const resetPages = record.prepare('DELETE FROM screening_pages WHERE screening = ?');
  const resetFailures = record.prepare('DELETE FROM screening_failures WHERE screening = ?');
  const insertFailure = record.prepare(
    `INSERT INTO screening_failures (screening, position, kind, detail, attempts, pairing)
     VALUES (@seq, @position, @kind, @detail, @attempts, @pairing)`,
  );
  const failures = record.prepare<[number, number, number], FailureRow>(
    `SELECT position, kind, detail, attempts, pairing FROM screening_failures
     WHERE screening = ? AND position >= ? AND position < ? ORDER BY position`,
  );
  const events = record.prepare<[number, number], ScreeningEventRow>(
    'SELECT revision, at, state, detail FROM screening_events WHERE screening = ? AND revision > ? ORDER BY revision',
  );
  const measured = record.prepare<[string, number], Pick<ScreeningRow, 'request' | 'judging_ms' | 'done'>>(
    'SELECT request, judging_ms, done FROM screenings WHERE model_version = ? AND done > 0 ORDER BY seq DESC LIMIT ?',
  );

  const together = <T>(act: () => T): T => record.transaction(act).immediate();
  const changeState = (seq: number, { state, pause, detail, at }: StateChange): void =>
    together(() => {
      const changed = change.get({ seq, state, pause: pause ?? null, at });
      if (changed === undefined) throw new Error(`There is no screening ${seq} to become ${state}.`);
      insertEvent.run({ seq, revision: changed.revision, at, state, detail: detail ?? null });
    });

  return {
    together,
    create: (screening) => {
      const row = bySeq.get(insert.run(screening).lastInsertRowid);
      if (row === undefined) throw new Error(`Screening ${screening.id} was stored and not found.`);
      return row;
    },
    find: (id) => byId.get(id),
    findBySeq: (seq) => bySeq.get(seq),
    page: (before, limit) => page.all(before, limit),
    unfinished: () => unfinished.all(),
    resize: (seq, size) => void resize.run({ seq, ...size }),
    progress: (seq, added) => void progress.run({ seq, ...added }),
    change: changeState,
    reset: (seq, modelVersion) =>
      together(() => {
        resetPages.run(seq);
        resetFailures.run(seq);
        reset.run({ seq, modelVersion });
      }),
    addFailure: (seq, failure) => void insertFailure.run({ seq, ...failure }),
    failuresBetween: (seq, from, to) => failures.all(seq, from, to),
    eventsAfter: (seq, revision) => events.all(seq, revision),
    measured: (modelVersion) => measured.all(modelVersion, MEASURED),
  };
}
