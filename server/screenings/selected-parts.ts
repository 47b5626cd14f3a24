/**
 * The lamps and dimmers of a screening by their place in its selection, each with its completed form: read in blocks, of which a
 * bounded number is kept, so that a list of any length takes the same memory.
 */
import type { EntryKind } from '../../db/entries.ts';
import type { ScreeningSelection, SelectedEntry } from '../../db/screening-selection.ts';
import type { AskedDimmer, AskedLamp } from '../schemas/pairing.ts';
import type { CompletedPart, FingerprintTemplate } from './fingerprint-template.ts';

export interface SelectedPart<Asked> {
  readonly id: string;
  readonly entry: number;
  readonly revision: number;
  readonly circuit: number;
  readonly asked: Asked;
  readonly completed: CompletedPart;
}

export interface SelectedParts {
  lamp(place: number): SelectedPart<AskedLamp>;
  dimmer(place: number): SelectedPart<AskedDimmer>;
}

const BLOCK_LENGTH = 64;
/** of each kind: some 2,000 parts, at a few kilobytes each */
const BLOCKS_KEPT = 32;

export function selectedParts(selection: ScreeningSelection, screening: number, template: FingerprintTemplate): SelectedParts {
  const lamps = keptBlocks((from) => selection.entries(screening, 'lamp', from, from + BLOCK_LENGTH).map(lampPart(template)));
  const dimmers = keptBlocks((from) => selection.entries(screening, 'dimmer', from, from + BLOCK_LENGTH).map(dimmerPart(template)));
  return { lamp: lamps, dimmer: dimmers };
}

function keptBlocks<Part>(read: (from: number) => readonly Part[]): (place: number) => Part {
  // A map gives its keys in the order of entering: the first one was not used for longest.
  const kept = new Map<number, readonly Part[]>();
  return (place) => {
    const block = Math.floor(place / BLOCK_LENGTH);
    const parts = kept.get(block) ?? read(block * BLOCK_LENGTH);
    kept.delete(block);
    kept.set(block, parts);
    const [longestUnused] = kept.keys();
    if (kept.size > BLOCKS_KEPT && longestUnused !== undefined) kept.delete(longestUnused);
    const part = parts[place % BLOCK_LENGTH];
    if (part === undefined) throw new Error(`A screening's selection has nothing at place ${place}.`);
    return part;
  };
}

function lampPart(template: FingerprintTemplate) {
  return (entry: SelectedEntry): SelectedPart<AskedLamp> => {
    const { lamp } = contentOf<{ lamp: AskedLamp }>(entry, 'lamp');
    return { ...standingOf(entry), asked: lamp, completed: template.completeLamp(lamp) };
  };
}

function dimmerPart(template: FingerprintTemplate) {
  return (entry: SelectedEntry): SelectedPart<AskedDimmer> => {
    const { dimmer } = contentOf<{ dimmer: AskedDimmer }>(entry, 'dimmer');
    return { ...standingOf(entry), asked: dimmer, completed: template.completeDimmer(dimmer) };
  };
}

function contentOf<T>({ id, content }: SelectedEntry, kind: EntryKind): T {
  const parsed = JSON.parse(content) as { readonly [kind: string]: unknown };
  if (parsed[kind] === undefined) throw new Error(`The ${kind} ${id} has a revision without a ${kind}.`);
  return parsed as T;
}

function standingOf({ id, entry, revision, circuit }: SelectedEntry) {
  return { id, entry, revision, circuit };
}
