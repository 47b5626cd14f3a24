/** What is known of a value that a pairing may have been completed with: where it stands, how far off it may be, how one would measure it. */
import type { Pairing } from '../../pairing.ts';

export interface Assumable {
  /** in words: "the diac's breakover voltage" */
  readonly what: string;
  readonly unit: string;
  /** SI value of one such unit */
  readonly scale: number;
  /** usual range of such a part, SI */
  readonly range: (pairing: Pairing) => readonly [number, number];
  /** how one would find the real value out */
  readonly measure: string;
  /** null: this pairing has no such part. `group` is the lamp group that the path names. */
  readonly read: (pairing: Pairing, group: number) => number | null;
  readonly write: (pairing: Pairing, group: number, value: number) => Pairing;
}

/** V r.m.s.; generic parts come in two sets, for 220-240 V and for 100-127 V supplies */
const HIGH_SUPPLY_FROM = 180;

export const bySupply =
  (at230: readonly [number, number], at120: readonly [number, number]) =>
  ({ mains }: Pairing): readonly [number, number] =>
    mains.voltage >= HIGH_SUPPLY_FROM ? at230 : at120;

export const always = (low: number, high: number) => (): readonly [number, number] => [low, high];

/** a value as people read it */
export const shown = ({ unit, scale }: Assumable, value: number): string => `${Number((value / scale).toPrecision(3))} ${unit}`;
