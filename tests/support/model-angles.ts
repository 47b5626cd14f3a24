/** When a circuit fires and lets go, half-cycle by half-cycle, and how far two such accounts are from each other. */
import type { Pairing } from '../../model/pairing.ts';
import { startRun } from './model-run.ts';

export interface Angles {
  /** degrees from the half-cycle's zero crossing; an end may pass 180 and belongs to where its firing was */
  readonly firings: readonly number[];
  readonly ends: readonly number[];
}

/** firings and ends that are compared: where a triac fires by the dozen, every firing multiplies a hair's breadth */
const FOLLOWED = 6;

/** from rest, the first half-cycle a positive (0) or negative (1) one; stops before a half-cycle that is undecided */
export function anglesFromRest(pairing: Pairing, dial: number, halfCycles: number, first: 0 | 1 = 0): Angles[] {
  const run = startRun(pairing, dial);
  run.index = first;
  const angles: Angles[] = [];
  for (let k = 0; k < halfCycles; k++) {
    const { outcome, record } = run.finishHalfCycle();
    if (outcome !== 'done') break;
    angles.push({ firings: record.firings, ends: record.ends });
  }
  return angles;
}

/** degrees between two accounts at their worst, over the half-cycles both hold; without end where their numbers differ */
export function angleDistance(a: readonly Angles[], b: readonly Angles[]): number {
  let most = 0;
  const common = Math.min(a.length, b.length);
  for (let k = 0; k < common; k++) {
    for (const key of ['firings', 'ends'] as const) {
      const [p, q] = [a[k]?.[key] ?? [], b[k]?.[key] ?? []];
      // a last half-cycle may end while the triac conducts
      const open = key === 'ends' && k === common - 1;
      if (!open && p.length !== q.length && Math.min(p.length, q.length) <= FOLLOWED) return Number.POSITIVE_INFINITY;
      for (let n = 0; n < Math.min(FOLLOWED, p.length, q.length); n++) most = Math.max(most, Math.abs((p[n] ?? 0) - (q[n] ?? 0)));
    }
  }
  return most;
}
