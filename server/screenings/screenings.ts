/** Screenings as the service offers them: asked for, shown, listed and cancelled. Running them is screening-turns.ts. */
import type { ScreeningRow } from '../../db/screenings.ts';
import type { AcceptedAnswer, AskedScreening, ScreeningAnswer, ScreeningRequest } from '../schemas/screening.ts';
import type { Issue } from '../schemas/wire-parsing.ts';
import { acceptScreening, acceptStaleScreenings } from './screening-asking.ts';
import type { ScreeningDependencies } from './screening-dependencies.ts';
import type { RunPace, ScreeningRun } from './screening-run.ts';
import { measuredCost } from './screening-speed.ts';
import { screeningToWire } from './screening-to-wire.ts';
import { screeningTurns } from './screening-turns.ts';
import { countStored } from './stored-counting.ts';

export type ScreeningAsked =
  | { readonly ok: true; readonly screening: AcceptedAnswer }
  | { readonly ok: false; readonly issues: readonly Issue[] };

export interface Screenings {
  ask(asked: AskedScreening): Promise<ScreeningAsked>;
  /** Asks for a screening of what is stale, for each mains; their ids. */
  askStale(): readonly string[];
  read(id: string): Promise<ScreeningAnswer | undefined>;
  /** Up to `limit`, newest first, asked for before the one with that `seq`. */
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

export function screeningsOf(deps: ScreeningDependencies, pace: RunPace = {}): Screenings {
  const { screenings: store, queue, signals, now } = deps;
  const turns = screeningTurns(deps, pace);

  const show = async (row: ScreeningRow, knownStored = 0): Promise<ScreeningAnswer> => {
    const run = turns.runOf(row.id);
    return screeningToWire(row, {
      pause: run?.pause() ?? null,
      waitingFor: run === undefined || run.pause() !== null ? undefined : await queue.waitingFor(),
      perHour: run?.perHour() ?? null,
      cost: measuredCost(store, JSON.parse(row.request) as ScreeningRequest),
      breadth: row.ended_at === null ? await queue.breadth() : undefined,
      knownStored,
      now: now(),
    });
  };

  return {
    ask: async (asked) => {
      const accepted = acceptScreening(deps, asked, now());
      if (!accepted.ok) return accepted;
      const { row } = accepted;
      const foundStored = await countStored(deps, row, JSON.parse(row.request) as ScreeningRequest);
      turns.advance();
      return { ok: true, screening: { ...(await show(store.find(row.id) ?? row, foundStored.pairings)), foundStored } };
    },
    askStale: () => {
      const ids = acceptStaleScreenings(deps, now()).map(({ id }) => id);
      turns.advance();
      return ids;
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
        turns.runOf(id)?.cancel();
        store.change(row.seq, { state: 'cancelled', at: now().toISOString() });
        signals.tell(id);
        await queue.forget(id);
      }
      return show(store.find(id) ?? row);
    },
    runOf: turns.runOf,
    start: turns.start,
    stop: turns.stop,
    idle: turns.idle,
  };
}
