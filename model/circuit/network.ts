/**
 * Lays out the circuit of a pairing: nodes, states, and the elements between them. What is linear and always there is listed once;
 * what switches (triac, diac, each lamp group's curve, bridge and drain) is described for mode-system.ts to put in per mode.
 *
 *   live source - Rline - S - choke(L || loss) - c - Rc - D - triac - A (lamp line) - groups, added load, leakage - neutral
 *   snubber D..A; interference capacitor S..A; timing network D..A (two-wire), or neutral..D (three-wire)
 *
 * Each state is scaled to the square root of its energy (x = v sqrt(C), x = i sqrt(L)), so that one norm serves all of them.
 */
import type { DiacDrive, LampGroup, Pairing } from '../pairing.ts';
import { ABSENT_LOSS, BRIDGE_DROP, DROPPER_DISCHARGE, LEAST_RESISTANCE, LINE_LEAKAGE, STRAY_CAPACITANCE } from '../tolerances.ts';
import { bleederCurve, type Curve, curveFalls, drainCurve, largerCurve, resistorCurve, tableCurve } from './lamp-curve.ts';

/** node numbers; NEUTRAL is the reference and is not solved for */
export const NEUTRAL = -1;

export interface Conductor {
  readonly a: number;
  readonly b: number;
  readonly conductance: number;
}

/** capacitor between two nodes; with a series resistance it is a branch of its own, without one (0) it fixes the voltage between them */
export interface CapacitorBranch {
  readonly a: number;
  readonly b: number;
  readonly capacitance: number;
  readonly resistance: number;
  readonly state: number;
}

export interface InductorBranch {
  readonly a: number;
  readonly b: number;
  readonly inductance: number;
  readonly state: number;
}

export interface ReservoirPart {
  readonly state: number;
  readonly capacitance: number;
  readonly surgeResistance: number;
  readonly drain: Curve;
}

/** One lamp group as its switching parts see it. Exactly one of the three forms holds: nothing that switches (`curve` null and no
 * reservoir), a static curve, or a reservoir with an optional bleeder curve. */
export interface GroupPart {
  readonly node: number;
  /** static draw at the node, or what an active bleeder tops a reservoir's draw up to */
  readonly curve: Curve | null;
  readonly reservoir: ReservoirPart | null;
}

export interface TimingPart {
  readonly resistorFrom: number;
  readonly resistorTo: number;
  readonly diacNode: number;
  readonly reference: number;
  /** sign of v(diacNode) - v(reference) while the mains charges it in a positive half-cycle */
  readonly orientation: 1 | -1;
}

export interface Network {
  readonly nodes: number;
  readonly states: number;
  /** sqrt(C) or sqrt(L) per state */
  readonly scale: Float64Array;
  readonly conductors: readonly Conductor[];
  readonly capacitors: readonly CapacitorBranch[];
  readonly inductors: readonly InductorBranch[];
  readonly sourceNode: number;
  readonly sourceConductance: number;
  readonly dimmerNode: number;
  readonly lampNode: number;
  /** where the timing resistor is connected and which node the diac's capacitor hangs on; null for a timed drive */
  readonly timing: TimingPart | null;
  /** branches whose currents add up to the current into the lamps (not the added load) */
  readonly groups: readonly GroupPart[];
  /** for each group: the node its input resistor is fed from is the lamp line; the resistor's other end and its conductance */
  readonly inputs: readonly { readonly to: number; readonly conductance: number }[];
  /** peak mains voltage, V, and angular frequency, rad/s */
  readonly peak: number;
  readonly omega: number;
}

/** groups of the same lamp are one group: N identical lamps in parallel are one lamp with R/N, C N, L/N, I N */
function mergeGroups(groups: readonly LampGroup[]): LampGroup[] {
  const merged = new Map<string, LampGroup>();
  for (const g of groups) {
    const key = JSON.stringify(g.lamp);
    const same = merged.get(key);
    merged.set(key, same === undefined ? g : { count: same.count + g.count, lamp: g.lamp });
  }
  return [...merged.values()];
}

function staticCurve(group: LampGroup): Curve | null {
  const { load, input } = group.lamp;
  const drop = load.kind === 'resistive' ? 0 : BRIDGE_DROP;
  const active = input.bleeder?.kind === 'active' ? bleederCurve(input.bleeder.current, input.bleeder.below, drop) : null;
  if (load.kind === 'reservoir') return active;
  if (load.kind === 'iv-table') {
    const table = tableCurve(load.points);
    return active === null ? table : largerCurve(table, active);
  }
  return active === null ? null : largerCurve(resistorCurve(load.resistance), active);
}

function timesCount(curve: Curve, count: number): Curve {
  return curve.map((s) => ({ from: s.from, slope: s.slope * count, offset: s.offset * count }));
}

/** no resistance at all would tie two nodes, or two capacitors, together */
const atLeast = (resistance: number): number => Math.max(resistance, LEAST_RESISTANCE);

class Layout {
  nodes = 0;
  readonly scales: number[] = [];
  readonly conductors: Conductor[] = [];
  readonly capacitors: CapacitorBranch[] = [];
  readonly inductors: InductorBranch[] = [];

  node(): number {
    return this.nodes++;
  }

  state(storage: number): number {
    this.scales.push(Math.sqrt(storage));
    return this.scales.length - 1;
  }

  conductor(a: number, b: number, resistance: number): void {
    this.conductors.push({ a, b, conductance: 1 / atLeast(resistance) });
  }

  /** straight between two nodes; no capacitance: nothing */
  capacitor(a: number, b: number, capacitance: number): void {
    if (capacitance > 0) this.capacitors.push({ a, b, capacitance, resistance: 0, state: this.state(capacitance) });
  }

  /** through a resistor of its own; no capacitance: nothing */
  seriesCapacitor(a: number, b: number, capacitance: number, resistance: number): void {
    if (capacitance > 0) this.capacitors.push({ a, b, capacitance, resistance: atLeast(resistance), state: this.state(capacitance) });
  }

  /** capacitor with its discharge resistor from a to a new node, which is returned; no capacitance: a itself */
  dropperFrom(a: number, capacitance: number, discharge: number): number {
    if (capacitance === 0) return a;
    const b = this.node();
    this.capacitor(a, b, capacitance);
    this.conductor(a, b, discharge);
    return b;
  }

  /** inductor with parallel loss from a to a new node, which is returned; no inductance: a itself */
  inductorFrom(a: number, inductance: number, loss: number | null): number {
    if (inductance === 0) return a;
    const b = this.node();
    this.inductors.push({ a, b, inductance, state: this.state(inductance) });
    this.conductor(a, b, loss ?? ABSENT_LOSS);
    return b;
  }
}

function layTiming(layout: Layout, drive: DiacDrive, wiring: 'two-wire' | 'three-wire', d: number, a: number): TimingPart {
  const reference = wiring === 'two-wire' ? a : d;
  const resistorFrom = wiring === 'two-wire' ? d : NEUTRAL;
  const t = layout.node();
  layout.capacitor(t, reference, drive.capacitance);
  let diacNode = t;
  if (drive.secondSection !== null) {
    diacNode = layout.node();
    layout.conductor(t, diacNode, drive.secondSection.resistance);
    layout.capacitor(diacNode, reference, drive.secondSection.capacitance);
  }
  return { resistorFrom, resistorTo: t, diacNode, reference, orientation: wiring === 'two-wire' ? 1 : -1 };
}

function layGroup(
  layout: Layout,
  group: LampGroup,
  line: number,
  mainsPeak: number,
): { part: GroupPart; input: { to: number; conductance: number } } {
  const { input, load } = group.lamp;
  const n = group.count;
  const to = layout.node();
  layout.conductor(line, to, input.seriesResistance / n);
  const behind = layout.dropperFrom(to, input.seriesCapacitance * n, DROPPER_DISCHARGE / n);
  const node = layout.inductorFrom(behind, input.inductance / n, input.inductorLoss === null ? null : input.inductorLoss / n);
  const curve = staticCurve(group);
  const stray = curve !== null && curveFalls(curve) ? STRAY_CAPACITANCE : 0;
  layout.capacitor(node, NEUTRAL, Math.max(input.capacitance, stray) * n);
  if (input.damper !== null) layout.seriesCapacitor(node, NEUTRAL, input.damper.capacitance * n, input.damper.resistance / n);
  if (input.bleeder?.kind === 'resistor') layout.conductor(node, NEUTRAL, input.bleeder.resistance / n);
  if (input.bleeder?.kind === 'resistor-capacitor') {
    layout.seriesCapacitor(node, NEUTRAL, input.bleeder.capacitance * n, input.bleeder.resistance / n);
  }
  if (load.kind === 'resistive' && curve === null) layout.conductor(node, NEUTRAL, load.resistance / n);
  const reservoir: ReservoirPart | null =
    load.kind === 'reservoir'
      ? {
          state: layout.state(load.capacitance * n),
          capacitance: load.capacitance * n,
          surgeResistance: atLeast(load.surgeResistance / n),
          drain: timesCount(drainCurve(load.drain, load.minimumVoltage, mainsPeak), n),
        }
      : null;
  return {
    part: { node, curve: curve === null ? null : timesCount(curve, n), reservoir },
    input: { to, conductance: 1 / atLeast(input.seriesResistance / n) },
  };
}

export function layNetwork(pairing: Pairing): Network {
  const { mains, dimmer } = pairing;
  const layout = new Layout();
  const peak = mains.voltage * Math.SQRT2;
  const s = layout.node();
  const c = layout.inductorFrom(s, dimmer.choke.inductance, dimmer.choke.lossResistance);
  const d = layout.node();
  layout.conductor(c, d, dimmer.choke.resistance);
  const a = layout.node();
  layout.conductor(a, NEUTRAL, LINE_LEAKAGE);
  if (dimmer.snubber !== null) layout.seriesCapacitor(d, a, dimmer.snubber.capacitance, dimmer.snubber.resistance);
  layout.capacitor(s, a, dimmer.interferenceCapacitance);
  const timing = dimmer.drive.kind === 'diac' ? layTiming(layout, dimmer.drive, dimmer.wiring, d, a) : null;
  const added = pairing.addedLoad;
  if (added?.kind === 'resistor') layout.conductor(a, NEUTRAL, added.resistance);
  if (added?.kind === 'resistor-capacitor') layout.seriesCapacitor(a, NEUTRAL, added.capacitance, added.resistance);
  const groups = mergeGroups(pairing.lamps).map((g) => layGroup(layout, g, a, peak));
  return {
    nodes: layout.nodes,
    states: layout.scales.length,
    scale: Float64Array.from(layout.scales),
    conductors: layout.conductors,
    capacitors: layout.capacitors,
    inductors: layout.inductors,
    sourceNode: s,
    sourceConductance: 1 / atLeast(mains.sourceResistance),
    dimmerNode: d,
    lampNode: a,
    timing,
    groups: groups.map((g) => g.part),
    inputs: groups.map((g) => g.input),
    peak,
    omega: 2 * Math.PI * mains.frequency,
  };
}
