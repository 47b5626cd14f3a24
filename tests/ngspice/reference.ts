/** The frozen results: what ngspice made of each case, with the deck's fingerprint so that a changed circuit or
 * deck cannot pass on an old result. */
import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import type { Case } from './circuits.ts';
import { type DeckTolerances, deck, ordinaryTolerances } from './deck.ts';
import type { Pattern } from './pattern.ts';

export interface FrozenCase {
  readonly name: string;
  /** of the deck */
  readonly fingerprint: string;
  readonly tolerances: DeckTolerances;
  /** half-cycles simulated from a fresh start */
  readonly halfCycles: number;
  readonly pattern: Pattern;
  /** the timing capacitor's voltage before and after the last dump seen, V; null for a timed drive or a dark lamp */
  readonly dump: { readonly from: number; readonly to: number } | null;
}

export interface Reference {
  readonly program: string;
  readonly made: string;
  readonly cases: readonly FrozenCase[];
}

export const referenceFile = new URL('./reference.json', import.meta.url);

export function readReference(): Reference {
  return JSON.parse(readFileSync(referenceFile, 'utf8')) as Reference;
}

/** Of the deck that ngspice reads for a single half-cycle of a case. */
export function fingerprint({ pairing, dial, tolerances }: Case): string {
  const netlist = deck(pairing, dial, 1, { ...ordinaryTolerances, ...tolerances });
  return createHash('sha256').update(netlist).digest('hex').slice(0, 16);
}
