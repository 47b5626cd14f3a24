/**
 * The progress of a screening as server-sent events (WHATWG HTML, 9.2). The id of an event is the screening's revision: who comes back
 * with the last one it saw gets every change of state since and the progress as it stands, and nothing twice.
 */
import type { ScreeningStore } from '../../db/screenings.ts';
import { waitFor } from './durable-writing.ts';
import type { ScreeningSignals } from './screening-signals.ts';
import { countsToWire } from './screening-to-wire.ts';
import type { Screenings } from './screenings.ts';

export interface EventSources {
  readonly screenings: ScreeningStore;
  readonly running: Pick<Screenings, 'runOf'>;
  readonly signals: ScreeningSignals;
}

/** ms without an event after which a comment shows that the connection lives */
const HEARTBEAT = 15_000;
/** ms between two events of progress: faster is unreadable */
const BREATH = 500;

/** Whether a reader who has seen `after` will ever get anything new. */
export function hasEventsAfter({ screenings }: Pick<EventSources, 'screenings'>, id: string, after: number): boolean {
  const row = screenings.find(id);
  return row !== undefined && (row.ended_at === null || row.revision > after);
}

export async function* screeningEvents(
  { screenings, running, signals }: EventSources,
  id: string,
  after: number,
  signal: AbortSignal,
): AsyncGenerator<string> {
  let seen = after;
  let shownPause: string | null = null;
  while (!signal.aborted) {
    // Before anything is read, so that no change falls between reading and waiting.
    const changed = signals.next(id, HEARTBEAT, signal);
    const row = screenings.find(id);
    if (row === undefined) return;
    const pause = running.runOf(id)?.pause() ?? null;
    // A full disk keeps the pause itself from being stored: it is shown without an id, and comes again with one when it is.
    const isUnstored = pause !== null && row.state === 'running' && shownPause !== pause.detail;
    const perHour = running.runOf(id)?.perHour() ?? null;

    let text = '';
    for (const { revision, at, state, detail } of screenings.eventsAfter(row.seq, seen)) {
      text += eventText('state', { at, state, detail }, revision);
    }
    if (isUnstored) text += eventText('state', { at: null, state: 'paused', detail: pause.detail });
    if (row.revision > seen) {
      const progress = { state: row.state, counts: countsToWire(row), rate_perHour: perHour === null ? null : Math.round(perHour) };
      text += eventText('progress', progress, row.revision);
    }
    shownPause = pause?.detail ?? null;
    seen = Math.max(seen, row.revision);
    yield text === '' ? ': nothing new\n\n' : text;
    if (row.ended_at !== null) return;
    await changed;
    await waitFor(BREATH, signal);
  }
}

function eventText(name: string, data: object, id?: number): string {
  return `${id === undefined ? '' : `id: ${id}\n`}event: ${name}\ndata: ${JSON.stringify(data)}\n\n`;
}
