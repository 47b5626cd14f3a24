/**
 * Writes down what became of a screening's pairings, in batches: verdicts, pages, failures and counts in one immediate transaction, so
 * that a kill at any moment leaves all of a batch or nothing. What cannot be written for want of room is kept and tried again.
 */
import { outcomeAt, PAGE_LENGTH, type PagedOutcome, type ScreeningPages, setOutcome } from '../../db/screening-pages.ts';
import type { ScreeningProgress } from '../../db/screenings.ts';

export interface Outcome {
  readonly position: number;
  readonly outcome: PagedOutcome['outcome'];
  /** Inside the transaction: stores what belongs to the outcome and gives the `seq` of its verdict, 0 where there is none. */
  readonly store: () => number;
  /** ms of judging */
  readonly took_ms?: number;
}

/** The part of a screening that recording writes to. */
export interface RecordingTarget {
  readonly seq: number;
  readonly pages: ScreeningPages;
  together<T>(act: () => T): T;
  progress(added: ScreeningProgress): void;
}

export interface OutcomeRecording {
  /** Positions of the page that nothing is known of; from now on it counts as open until all are written. */
  open(page: number, length: number): readonly number[];
  isOpen(position: number): boolean;
  /** Takes an outcome to be written with the next batch; what is known of a position already stays. */
  add(outcome: Outcome): void;
  /** How many outcomes wait to be written. */
  waiting(): number;
  /** Writes what waits, in one transaction; throws what the record throws, and keeps everything. */
  write(): void;
}

interface OpenPage {
  readonly bytes: Buffer;
  readonly length: number;
  readonly known: Set<number>;
}

export function outcomeRecording({ seq, pages, together, progress }: RecordingTarget, firstPage: number): OutcomeRecording {
  // In the order of opening, which is that of the pages: the first one is where a restart has to begin.
  const openPages = new Map<number, OpenPage>();
  let nextPage = firstPage;
  let batch: Outcome[] = [];

  const placeOf = (position: number) => ({ page: Math.floor(position / PAGE_LENGTH), place: position % PAGE_LENGTH });
  const pageOf = (position: number): OpenPage | undefined => openPages.get(placeOf(position).page);

  const firstOpenPage = (): number => {
    for (const [page, { known, length }] of openPages) if (known.size < length) return page;
    return nextPage;
  };

  const writeBatch = (): ReadonlyMap<number, Buffer> => {
    const dirty = new Map<number, Buffer>();
    const added = { stored: 0, done: 0, failed: 0, judging_ms: 0 };
    for (const { position, outcome, store, took_ms } of batch) {
      const { page, place } = placeOf(position);
      const bytes = dirty.get(page) ?? Buffer.from(openPages.get(page)?.bytes ?? pages.read(seq, page));
      dirty.set(page, bytes);
      setOutcome(bytes, place, { outcome, verdict: store() });
      added[outcome === 'judged' ? 'done' : outcome === 'failed' ? 'failed' : 'stored'] += 1;
      added.judging_ms += took_ms ?? 0;
    }
    for (const [page, bytes] of dirty) pages.write(seq, page, bytes);
    progress({ ...added, open_page: firstOpenPage() });
    return dirty;
  };

  return {
    open: (page, length) => {
      const bytes = pages.read(seq, page);
      const places = Array.from({ length }, (_, place) => place);
      const known = places.filter((place) => outcomeAt(bytes, place).outcome !== 'open');
      nextPage = page + 1;
      const openPage = { bytes, length, known: new Set(known) };
      if (known.length < length) openPages.set(page, openPage);
      return places.filter((place) => !openPage.known.has(place)).map((place) => page * PAGE_LENGTH + place);
    },
    isOpen: (position) => {
      const page = pageOf(position);
      return page !== undefined && !page.known.has(placeOf(position).place);
    },
    add: (outcome) => {
      const page = pageOf(outcome.position);
      const { place } = placeOf(outcome.position);
      if (page === undefined || page.known.has(place)) return;
      page.known.add(place);
      batch.push(outcome);
    },
    waiting: () => batch.length,
    write: () => {
      if (batch.length === 0) return;
      const dirty = together(writeBatch);
      // Only now that the transaction stands: a failed one leaves everything as it was.
      for (const [page, bytes] of dirty) {
        const openPage = openPages.get(page);
        openPage?.bytes.set(bytes);
        if (openPage?.known.size === openPage?.length) openPages.delete(page);
      }
      batch = [];
    },
  };
}
