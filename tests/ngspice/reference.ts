/** The frozen results: what ngspice made of each case, with the circuit's fingerprint so that a changed case cannot pass on an old result. */
import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import type { Case } from './circuits.ts';
import type { DeckTolerances } from './deck.ts';
import type { Pattern } from './pattern.ts';

export interface FrozenCase {
  readonly name: string;
  /** of pairing and dial */
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

export function fingerprint({ pairing, dial }: Case): string {
  return createHash('sha256')
    .update(JSON.stringify([pairing, dial]))
    .digest('hex')
    .slice(0, 16);
}
