/**
 * What a class of lamps is made of: a few circuits, each with one quantity that runs over the class's range (place 0 to 1). Component
 * values are generic, from memory, for 220-240 V and for 100-127 V supplies; each circuit says which ones it takes and why.
 */
import type { Lamp, LampInput } from '../pairing.ts';
import { HIGH_SUPPLY_FROM } from './profile-tolerances.ts';
import type { Sine } from './undimmed-lamp.ts';

/** What is known of the lamp besides its class: the supply it is made for and its power there. */
export interface Rating extends Sine {
  /** W */
  readonly power: number;
}

export interface ClassCircuit {
  readonly name: string;
  /** which end of which component's range it stands for, and what follows from that */
  readonly basis: string;
  /** places judged where no power factor is stated; none for a circuit that lies inside what the others span */
  readonly places: readonly number[];
  /** the circuit at a place of its range; `scale` multiplies what it draws, about 1 for the rated power */
  lamp(rating: Rating, place: number, scale: number): Lamp;
}

export interface ClassRange {
  /** what the range spans, and what it leaves out */
  readonly spans: string;
  /** what to ask the maker for when the range is judged both ways */
  readonly ask: string;
  readonly circuits: readonly ClassCircuit[];
}

/** a generic value for either supply */
export function bySupply<T>({ voltage }: Sine, at230: T, at120: T): T {
  return voltage >= HIGH_SUPPLY_FROM ? at230 : at120;
}

/** a place of a range, evenly and in proportion */
export const between = (from: number, to: number, place: number): number => from + (to - from) * place;
export const betweenRatios = (from: number, to: number, place: number): number => from * (to / from) ** place;

export function inputWith(parts: Partial<LampInput>): LampInput {
  return {
    seriesResistance: 22,
    seriesCapacitance: 0,
    inductance: 0,
    inductorLoss: null,
    capacitance: 0,
    damper: null,
    bleeder: null,
    ...parts,
  };
}

/** 4.7 mH and about 1 kOhm of core loss for each mH: the largest usual interference inductor */
export const LARGE_CHOKE: Partial<LampInput> = { inductance: 4.7e-3, inductorLoss: 4700 };
