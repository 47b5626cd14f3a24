/** Finds what an assumed path names in a pairing: the value and how to change it. */
import type { Pairing } from '../../pairing.ts';
import type { AssumedValue } from '../../verdict.ts';
import type { Assumable } from './assumable.ts';
import { ASSUMABLE_OF_DIMMER } from './assumable-dimmer.ts';
import { ASSUMABLE_OF_LAMP } from './assumable-lamp.ts';

export interface OpenValue {
  readonly path: string;
  readonly about: Assumable;
  readonly assumed: number;
  readonly low: number;
  readonly high: number;
  readonly at: (value: number) => Pairing;
}

const LAMP_PATH = /^lamps\[(\d+)\]\.(lamp\..+)$/;

/** every path that is looked at, the lamp's with `[]` for the index of its group */
export const ASSUMABLE_PATHS: readonly string[] = [
  ...Object.keys(ASSUMABLE_OF_DIMMER),
  ...Object.keys(ASSUMABLE_OF_LAMP).map((path) => `lamps[].${path}`),
];

function lookUp(path: string): { readonly about: Assumable; readonly group: number } | null {
  const [, group, inLamp] = LAMP_PATH.exec(path) ?? [];
  const about = inLamp === undefined ? ASSUMABLE_OF_DIMMER[path] : ASSUMABLE_OF_LAMP[inLamp];
  return about === undefined ? null : { about, group: Number(group ?? 0) };
}

/**
 * null where nothing of the kind is in the circuit, or where its value cannot matter to steadiness. A part that was taken as absent (0)
 * stays so unless a range is given: to doubt whole parts would leave nearly every grade open.
 */
export function openValue(pairing: Pairing, { path, range }: AssumedValue): OpenValue | null {
  const found = lookUp(path);
  const assumed = found?.about.read(pairing, found.group) ?? null;
  if (found === null || assumed === null || (assumed === 0 && range === null)) return null;
  const { about, group } = found;
  const [usualLow, usualHigh] = about.range(pairing);
  const low = Math.min(assumed, range?.low ?? usualLow);
  const high = Math.max(assumed, range?.high ?? usualHigh);
  return { path, about, assumed, low, high, at: (value) => about.write(pairing, group, value) };
}
