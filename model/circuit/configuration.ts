/**
 * The discrete state of everything that switches, and where each part's window of validity lies: the guards that tell when a part
 * moves to its neighbouring state. The triac's and the diac's logic (gate, latch, hold) is not here but in engine/dimmer-run.ts; this file
 * only knows their electrical region.
 */
import { BRIDGE_DROP } from '../tolerances.ts';
import type { Curve, CurveSegment } from './lamp-curve.ts';
import type { GroupPart, Network } from './network.ts';

export type Sign = 1 | -1;

/** open; low: the straight part of the on-characteristic through zero, |i| up to its knee; on: beyond the knee */
export type TriacRegion = 'open' | 'low' | 'on';

export interface GroupConfiguration {
  /** polarity in which the group's curve segment or bridge is; 1 where neither has one */
  readonly sign: Sign;
  /** segment of the group's curve, counted from zero volts */
  readonly segment: number;
  /** the bridge charges the reservoir */
  readonly conducting: boolean;
  /** an active bleeder tops up a reservoir's draw */
  readonly topped: boolean;
  /** segment of the reservoir's drain */
  readonly drain: number;
}

export interface Configuration {
  readonly triac: TriacRegion;
  /** 1 unless the region is "on" */
  readonly triacSign: Sign;
  readonly diac: boolean;
  readonly diacSign: Sign;
  readonly groups: readonly GroupConfiguration[];
}

/** outputs of a mode; each group adds GROUP_OUTPUTS rows from GROUPS_FROM on */
export const OUTPUT = {
  lineCurrent: 0,
  triacCurrent: 1,
  lampVoltage: 2,
  lampCurrent: 3,
  timingVoltage: 4,
  diacCurrent: 5,
  triacVoltage: 6,
} as const;
export const GROUPS_FROM = 7;
export const GROUP_OUTPUT = { voltage: 0, bridge: 1, bridgeReversed: 2, reservoir: 3, excess: 4 } as const;
export const GROUP_OUTPUTS = 5;

/** most guards a group has in any configuration: its curve's segment, its bridge both ways or with a bleeder, its drain's segment */
export const MOST_GROUP_GUARDS = 4;

export type Change = (from: Configuration) => Configuration;

/** the configuration holds while lower < output < upper; crossing a bound applies its change */
export interface Guard {
  readonly output: number;
  readonly lower: number;
  readonly upper: number;
  readonly belowLower: Change | null;
  readonly aboveUpper: Change | null;
}

export function restingConfiguration(network: Network): Configuration {
  const group: GroupConfiguration = { sign: 1, segment: 0, conducting: false, topped: false, drain: 0 };
  return { triac: 'open', triacSign: 1, diac: false, diacSign: 1, groups: network.groups.map(() => group) };
}

/** key of the linear system alone: mirrored configurations share it */
export function linearKey(c: Configuration): string {
  let key = `${c.triac},${c.diac ? 1 : 0}`;
  for (const g of c.groups) key += `;${g.segment},${g.conducting ? 1 : 0}${g.topped ? 1 : 0},${g.drain}`;
  return key;
}

export function signKey(c: Configuration): string {
  let key = `${c.triacSign},${c.diacSign}`;
  for (const g of c.groups) key += `,${g.sign}`;
  return key;
}

function changeGroup(index: number, change: (g: GroupConfiguration) => Partial<GroupConfiguration>): Change {
  return (from) => ({
    ...from,
    groups: from.groups.map((g, k) => {
      if (k !== index) return g;
      const next = { ...g, ...change(g) };
      // at rest a group has no polarity: one spelling for one state
      return next.segment === 0 && !next.conducting ? { ...next, sign: 1 as const } : next;
    }),
  });
}

function window(output: number, sign: Sign, from: number, to: number, below: Change | null, above: Change | null): Guard {
  return sign === 1
    ? { output, lower: from, upper: to, belowLower: below, aboveUpper: above }
    : { output, lower: -to, upper: -from, belowLower: above, aboveUpper: below };
}

const endOf = (curve: Curve, segment: number): number => curve[segment + 1]?.from ?? Number.POSITIVE_INFINITY;

function curveGuards(index: number, part: GroupPart, g: GroupConfiguration, base: number): Guard[] {
  const curve = part.curve;
  if (curve === null || curve.length < 2) return [];
  const output = base + GROUP_OUTPUT.voltage;
  if (g.segment === 0) {
    const edge = endOf(curve, 0);
    const enter = (sign: Sign) => changeGroup(index, () => ({ segment: 1, sign }));
    return [{ output, lower: -edge, upper: edge, belowLower: enter(-1), aboveUpper: enter(1) }];
  }
  const step = (by: number) => changeGroup(index, (now) => ({ segment: now.segment + by }));
  const from = (curve[g.segment] as CurveSegment).from;
  return [window(output, g.sign, from, endOf(curve, g.segment), step(-1), step(1))];
}

function reservoirGuards(index: number, part: GroupPart, g: GroupConfiguration, base: number): Guard[] {
  const reservoir = part.reservoir;
  if (reservoir === null) return [];
  const guards: Guard[] = [];
  const segment = part.curve?.[g.segment];
  const bleeds = segment !== undefined && (segment.slope !== 0 || segment.offset !== 0);
  const infinity = Number.POSITIVE_INFINITY;
  if (g.conducting) {
    const block = changeGroup(index, () => ({ conducting: false, topped: false }));
    guards.push(window(base + GROUP_OUTPUT.bridge, g.sign, BRIDGE_DROP, infinity, block, null));
    if (g.topped) {
      const overtake = changeGroup(index, () => ({ topped: false }));
      guards.push(window(base + GROUP_OUTPUT.excess, g.sign, -infinity, 0, null, overtake));
    } else if (bleeds) {
      const topUp = changeGroup(index, () => ({ topped: true }));
      guards.push(window(base + GROUP_OUTPUT.excess, g.sign, 0, infinity, topUp, null));
    }
  } else {
    // v - vres below the drop, and v + vres above minus the drop; mirrored, the two outputs exchange their meaning
    const conduct = (sign: Sign) => changeGroup(index, () => ({ conducting: true, topped: bleeds, sign }));
    const forward = base + (g.sign === 1 ? GROUP_OUTPUT.bridge : GROUP_OUTPUT.bridgeReversed);
    const reverse = base + (g.sign === 1 ? GROUP_OUTPUT.bridgeReversed : GROUP_OUTPUT.bridge);
    guards.push({ output: forward, lower: -infinity, upper: BRIDGE_DROP, belowLower: null, aboveUpper: conduct(1) });
    guards.push({ output: reverse, lower: -BRIDGE_DROP, upper: infinity, belowLower: conduct(-1), aboveUpper: null });
  }
  const step = (by: number) => changeGroup(index, (now) => ({ drain: now.drain + by }));
  const from = g.drain === 0 ? -infinity : (reservoir.drain[g.drain] as CurveSegment).from;
  guards.push(window(base + GROUP_OUTPUT.reservoir, g.sign, from, endOf(reservoir.drain, g.drain), step(-1), step(1)));
  return guards;
}

/** the guards of every lamp group in this configuration */
export function groupGuards(network: Network, c: Configuration): Guard[] {
  return network.groups.flatMap((part, k) => {
    const g = c.groups[k] as GroupConfiguration;
    const base = GROUPS_FROM + k * GROUP_OUTPUTS;
    return [...curveGuards(k, part, g, base), ...reservoirGuards(k, part, g, base)];
  });
}
