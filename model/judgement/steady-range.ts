/** Finds the part of the dial over which a pairing runs steadily, up and down alike, and the lit part it has to be compared with. */
import type { DialRow, PopOn } from '../verdict.ts';

/** rows of both sweeps at one position */
export interface DialPosition {
  readonly position: number;
  readonly rows: readonly DialRow[];
}

export function byPosition(dial: readonly DialRow[]): DialPosition[] {
  const positions = [...new Set(dial.map((r) => r.position))].sort((a, b) => a - b);
  return positions.map((position) => ({ position, rows: dial.filter((r) => r.position === position) }));
}

const isLit = (row: DialRow): boolean => row.state !== 'dark';
const isFine = (row: DialRow): boolean => row.state === 'steady' || row.state === 'dark';

/** lowest position from which every position up to the top is steady in both sweeps; null where the top itself is not */
export function steadyFrom(positions: readonly DialPosition[]): number | null {
  let from: number | null = null;
  for (const { position, rows } of positions.toReversed()) {
    if (!rows.every((r) => r.state === 'steady')) break;
    from = position;
  }
  return from;
}

/** every lit row is steady, and no dark row lies above a lit one in the same sweep */
export function steadyWhereLit(dial: readonly DialRow[]): boolean {
  if (!dial.every(isFine) || !dial.some(isLit)) return false;
  return (['up', 'down'] as const).every((sweep) => {
    const rows = dial.filter((r) => r.sweep === sweep).sort((a, b) => a.position - b.position);
    const firstLit = rows.findIndex(isLit);
    return firstLit < 0 ? rows.length === 0 : rows.slice(firstLit).every(isLit);
  });
}

export function popOn(dial: readonly DialRow[]): PopOn {
  const lowestLit = (sweep: 'up' | 'down'): number | null => {
    const lit = dial.filter((r) => r.sweep === sweep && isLit(r)).map((r) => r.position);
    return lit.length === 0 ? null : Math.min(...lit);
  };
  return { litFrom: lowestLit('up'), outBelow: lowestLit('down') };
}
