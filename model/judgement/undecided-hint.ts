/** Says what to give so that a pairing may be decided after all, where a lamp as given cannot be told how it switches. */
import type { Lamp, Pairing } from '../pairing.ts';
import { LEAST_FILM_CAPACITOR } from './judgement-figures.ts';

/** Its current falls as its voltage rises: without a capacitor beside it, it has no one state that it settles in behind an inductor. */
function tipsOver({ load, input }: Lamp): boolean {
  if (load.kind !== 'iv-table' || input.capacitance >= LEAST_FILM_CAPACITOR) return false;
  return load.points.some((p, k) => p.current < (load.points[k - 1]?.current ?? 0));
}

/** a sentence with a space before it; empty where nothing is known that would help */
export function undecidedHint({ lamps }: Pairing): string {
  const groups = lamps.flatMap(({ lamp }, k) => (tipsOver(lamp) ? [k + 1] : []));
  if (groups.length === 0) return '';
  const whose = lamps.length === 1 ? 'The lamps' : `The lamps of group ${groups.join(' and ')}`;
  return ` ${whose} draw less current as their voltage rises, and are given with next to no capacitor at their input: give their input capacitance, which such lamps have.`;
}
