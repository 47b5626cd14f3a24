/**
 * The circuit of a pairing written down a second time, element by element, for tests that must not take the model's own layout and nodal
 * analysis on trust. Nodes are numbers, NEUTRAL is the reference; states come in the order of the model's network, which the user of
 * this file must check by their storage. What switches is left open: triac, diac and the lamps' curves are added by whoever asks.
 */
import { bleederCurve, type Curve, drainCurve, largerCurve, resistorCurve, tableCurve } from '../../model/circuit/lamp-curve.ts';
import type { Lamp, LampGroup, Pairing } from '../../model/pairing.ts';
import {
  ABSENT_LOSS,
  BRIDGE_DROP,
  DROPPER_DISCHARGE,
  LEAST_RESISTANCE,
  LINE_LEAKAGE,
  RESERVOIR_LEAKAGE,
  STRAY_CAPACITANCE,
} from '../../model/tolerances.ts';

export const NEUTRAL = -1;

export interface Branch {
  readonly a: number;
  readonly b: number;
}
export interface ResistorElement extends Branch {
  readonly resistance: number;
}
/** a capacitor or an inductor; `storage` is its capacitance or inductance */
export interface StoringElement extends Branch {
  readonly storage: number;
  readonly state: number;
}

export interface ReservoirElement {
  readonly state: number;
  readonly capacitance: number;
  readonly surgeResistance: number;
  /** of one lamp; the current of `count` is drawn */
  readonly drain: Curve;
  readonly leakage: number;
}

export interface LampElement {
  readonly node: number;
  readonly count: number;
  /** of one lamp */
  readonly curve: Curve | null;
  readonly reservoir: ReservoirElement | null;
}

export interface Circuit {
  readonly nodes: number;
  readonly storages: readonly number[];
  readonly resistors: readonly ResistorElement[];
  readonly capacitors: readonly StoringElement[];
  readonly inductors: readonly StoringElement[];
  /** the mains behind its wiring */
  readonly source: { readonly node: number; readonly resistance: number };
  readonly triac: Branch;
  readonly timing: { readonly resistor: Branch; readonly diac: Branch } | null;
  readonly lamps: readonly LampElement[];
  /** the lamps' series resistors, whose currents are the lamps' */
  readonly inputs: readonly ResistorElement[];
}

const least = (resistance: number): number => Math.max(resistance, LEAST_RESISTANCE);

function curveOf({ load, input }: Lamp): Curve | null {
  const drop = load.kind === 'resistive' ? 0 : BRIDGE_DROP;
  const active = input.bleeder?.kind === 'active' ? bleederCurve(input.bleeder.current, input.bleeder.below, drop) : null;
  const own =
    load.kind === 'iv-table'
      ? tableCurve(load.points)
      : load.kind === 'resistive' && active !== null
        ? resistorCurve(load.resistance)
        : null;
  if (own !== null && active !== null) return largerCurve(own, active);
  return own ?? active;
}

export function circuitOf(pairing: Pairing): Circuit {
  const { mains, dimmer, addedLoad } = pairing;
  let nodes = 0;
  const node = (): number => nodes++;
  const storages: number[] = [];
  const resistors: ResistorElement[] = [];
  const capacitors: StoringElement[] = [];
  const inductors: StoringElement[] = [];
  const inputs: ResistorElement[] = [];
  const resistor = (a: number, b: number, resistance: number): void => {
    resistors.push({ a, b, resistance: least(resistance) });
  };
  const capacitor = (a: number, b: number, storage: number): void => {
    if (storage > 0) capacitors.push({ a, b, storage, state: storages.push(storage) - 1 });
  };
  const seriesCapacitor = (a: number, b: number, resistance: number, storage: number): void => {
    if (storage === 0) return;
    const between = node();
    resistor(a, between, resistance);
    capacitor(between, b, storage);
  };
  const inductorTo = (a: number, storage: number, loss: number | null): number => {
    if (storage === 0) return a;
    const b = node();
    inductors.push({ a, b, storage, state: storages.push(storage) - 1 });
    resistor(a, b, loss ?? ABSENT_LOSS);
    return b;
  };

  const dropperTo = (a: number, storage: number, discharge: number): number => {
    if (storage === 0) return a;
    const b = node();
    capacitor(a, b, storage);
    resistor(a, b, discharge);
    return b;
  };

  const s = node();
  const d = node();
  const line = node();
  resistor(inductorTo(s, dimmer.choke.inductance, dimmer.choke.lossResistance), d, dimmer.choke.resistance);
  resistor(line, NEUTRAL, LINE_LEAKAGE);
  if (dimmer.snubber !== null) seriesCapacitor(d, line, dimmer.snubber.resistance, dimmer.snubber.capacitance);
  capacitor(s, line, dimmer.interferenceCapacitance);
  let timing: Circuit['timing'] = null;
  if (dimmer.drive.kind === 'diac') {
    const { drive } = dimmer;
    const t = node();
    const reference = dimmer.wiring === 'two-wire' ? line : d;
    capacitor(t, reference, drive.capacitance);
    let last = t;
    if (drive.secondSection !== null) {
      last = node();
      resistor(t, last, drive.secondSection.resistance);
      capacitor(last, reference, drive.secondSection.capacitance);
    }
    timing = { resistor: { a: dimmer.wiring === 'two-wire' ? d : NEUTRAL, b: t }, diac: { a: last, b: reference } };
  }
  if (addedLoad?.kind === 'resistor') resistor(line, NEUTRAL, addedLoad.resistance);
  if (addedLoad?.kind === 'resistor-capacitor') seriesCapacitor(line, NEUTRAL, addedLoad.resistance, addedLoad.capacitance);

  const lampOf = ({ count, lamp }: LampGroup): LampElement => {
    const { input, load } = lamp;
    const fed = node();
    const series = { a: line, b: fed, resistance: least(input.seriesResistance / count) };
    resistors.push(series);
    inputs.push(series);
    const behind = dropperTo(fed, input.seriesCapacitance * count, DROPPER_DISCHARGE / count);
    const at = inductorTo(behind, input.inductance / count, input.inductorLoss === null ? null : input.inductorLoss / count);
    const curve = curveOf(lamp);
    const falls = curve?.some((segment) => segment.slope < 0) ?? false;
    capacitor(at, NEUTRAL, count * (falls ? Math.max(input.capacitance, STRAY_CAPACITANCE) : input.capacitance));
    if (input.damper !== null) seriesCapacitor(at, NEUTRAL, input.damper.resistance / count, input.damper.capacitance * count);
    const { bleeder } = input;
    if (bleeder?.kind === 'resistor') resistor(at, NEUTRAL, bleeder.resistance / count);
    if (bleeder?.kind === 'resistor-capacitor') seriesCapacitor(at, NEUTRAL, bleeder.resistance / count, bleeder.capacitance * count);
    if (load.kind === 'resistive' && curve === null) resistor(at, NEUTRAL, load.resistance / count);
    if (load.kind !== 'reservoir') return { node: at, count, curve, reservoir: null };
    const reservoir = {
      state: storages.push(load.capacitance * count) - 1,
      capacitance: load.capacitance * count,
      surgeResistance: least(load.surgeResistance / count),
      drain: drainCurve(load.drain, load.minimumVoltage, mains.voltage * Math.SQRT2),
      leakage: RESERVOIR_LEAKAGE,
    };
    return { node: at, count, curve, reservoir };
  };
  const merged: LampGroup[] = [];
  for (const group of pairing.lamps) {
    const known = merged.findIndex((m) => JSON.stringify(m.lamp) === JSON.stringify(group.lamp));
    if (known < 0) merged.push(group);
    else merged[known] = { lamp: group.lamp, count: (merged[known]?.count ?? 0) + group.count };
  }
  const lamps = merged.map(lampOf);
  return {
    nodes,
    storages,
    resistors,
    capacitors,
    inductors,
    source: { node: s, resistance: least(mains.sourceResistance) },
    triac: { a: d, b: line },
    timing,
    lamps,
    inputs,
  };
}
