/**
 * What became of each pairing of a screening, 7 bytes a position: an outcome and the verdict it points at. A page holds 64 positions;
 * one that nothing is known of has no row. Ten million pairings take 70 MB.
 */
import type { RecordDatabase } from './record.ts';

export const PAGE_LENGTH = 64;
const OUTCOME_LENGTH = 7;

/** 0 is what a position holds before anything became of it */
export const OUTCOMES = ['open', 'stored', 'judged', 'failed'] as const;
export type PairingOutcome = (typeof OUTCOMES)[number];

export interface PagedOutcome {
  readonly outcome: PairingOutcome;
  /** `seq` of the verdict; 0 where there is none */
  readonly verdict: number;
}

export interface ScreeningPages {
  /** The page's bytes, to be read and changed by the functions below; fresh ones where there is no row. */
  read(screening: number, page: number): Buffer;
  write(screening: number, page: number, outcomes: Buffer): void;
  /** Pages from `page` on that have a row, at most `limit`. */
  from(screening: number, page: number, limit: number): readonly { readonly page: number; readonly outcomes: Buffer }[];
}

export function screeningPages(record: RecordDatabase): ScreeningPages {
  const read = record.prepare<[number, number], Buffer>('SELECT outcomes FROM screening_pages WHERE screening = ? AND page = ?').pluck();
  const write = record.prepare(
    `INSERT INTO screening_pages (screening, page, outcomes) VALUES (?, ?, ?)
     ON CONFLICT (screening, page) DO UPDATE SET outcomes = excluded.outcomes`,
  );
  const from = record.prepare<[number, number, number], { page: number; outcomes: Buffer }>(
    'SELECT page, outcomes FROM screening_pages WHERE screening = ? AND page >= ? ORDER BY page LIMIT ?',
  );
  return {
    read: (screening, page) => read.get(screening, page) ?? Buffer.alloc(PAGE_LENGTH * OUTCOME_LENGTH),
    write: (screening, page, outcomes) => void write.run(screening, page, outcomes),
    from: (screening, page, limit) => from.all(screening, page, limit),
  };
}

/** `place` is the position within the page. */
export function outcomeAt(page: Buffer, place: number): PagedOutcome {
  const at = place * OUTCOME_LENGTH;
  const outcome = OUTCOMES[page.readUInt8(at)];
  if (outcome === undefined) throw new Error(`A page of a screening holds an outcome that this version does not know: ${page[at]}.`);
  return { outcome, verdict: page.readUIntLE(at + 1, OUTCOME_LENGTH - 1) };
}

export function setOutcome(page: Buffer, place: number, { outcome, verdict }: PagedOutcome): void {
  const at = place * OUTCOME_LENGTH;
  page.writeUInt8(OUTCOMES.indexOf(outcome), at);
  page.writeUIntLE(verdict, at + 1, OUTCOME_LENGTH - 1);
}
