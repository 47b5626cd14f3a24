/**
 * Which pairing stands at which position of a screening: the product lamps x dimmers x counts, the count running fastest, or the list
 * of a re-screening. Nothing is kept of a product: a position is arithmetic.
 */
import { PAGE_LENGTH } from '../../db/screening-pages.ts';
import type { ScreeningSelection } from '../../db/screening-selection.ts';
import type { ScreeningRow } from '../../db/screenings.ts';

export interface PositionedPairing {
  readonly position: number;
  /** places in the selection */
  readonly lamp: number;
  readonly dimmer: number;
  readonly count: number;
}

export interface PairingPositions {
  readonly total: number;
  readonly pages: number;
  at(position: number): PositionedPairing;
  /** The pairings of a page in their order. */
  page(page: number): readonly PositionedPairing[];
}

export type PositionedScreening = Pick<ScreeningRow, 'seq' | 'listed' | 'dimmers' | 'total'>;

export function pairingPositions(
  { seq, listed, dimmers, total }: PositionedScreening,
  counts: readonly number[],
  selection: ScreeningSelection,
): PairingPositions {
  const between = (from: number, to: number): readonly PositionedPairing[] => {
    if (listed === 1) return selection.pairs(seq, from, to);
    return Array.from({ length: to - from }, (_, index) => inProduct(from + index, dimmers, counts));
  };
  return {
    total,
    pages: Math.ceil(total / PAGE_LENGTH),
    at: (position) => {
      const [pairing] = between(position, position + 1);
      if (pairing === undefined) throw new Error(`A screening has nothing at position ${position}.`);
      return pairing;
    },
    page: (page) => between(page * PAGE_LENGTH, Math.min(total, (page + 1) * PAGE_LENGTH)),
  };
}

function inProduct(position: number, dimmers: number, counts: readonly number[]): PositionedPairing {
  const pair = Math.floor(position / counts.length);
  const count = counts[position % counts.length];
  if (count === undefined) throw new Error('A screening without a lamp count has no positions.');
  return { position, lamp: Math.floor(pair / dimmers), dimmer: pair % dimmers, count };
}
