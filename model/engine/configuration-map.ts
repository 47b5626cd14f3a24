/**
 * The configurations that a circuit has passed through and the ways between them: everything of a mode that does not depend on the dial,
 * found once for all its positions. Filled in as it is met.
 */
import { type Configuration, type Guard, groupGuards, linearKey, signKey } from '../circuit/configuration.ts';
import { GROUP_CONSTANTS, type OpenModeSystem, openModeSystem } from '../circuit/mode-system.ts';
import type { Network } from '../circuit/network.ts';
import { numbers } from '../numbers.ts';
import type { Dimmer } from '../pairing.ts';
import type { PortModes } from './port-modes.ts';

/** what the triac or the diac can switch to */
const SWITCHINGS = [
  { triac: 'open', triacSign: 1 },
  { triac: 'low', triacSign: 1 },
  { triac: 'on', triacSign: 1 },
  { triac: 'on', triacSign: -1 },
  { diac: false, diacSign: 1 },
  { diac: true, diacSign: 1 },
  { diac: true, diacSign: -1 },
] as const satisfies readonly Partial<Configuration>[];
export const SWITCH = {
  triacOpen: 0,
  triacLow: 1,
  triacOnPositive: 2,
  triacOnNegative: 3,
  diacOff: 4,
  diacOnPositive: 5,
  diacOnNegative: 6,
} as const;
export type Switching = (typeof SWITCH)[keyof typeof SWITCH];

/** the ways out of a configuration: by each switching, then by crossing each guard's lower bound and its upper */
export const wayBySwitching = (switching: Switching): number => switching;
export const wayByGuard = (guard: number, side: 0 | 1): number => SWITCHINGS.length + 2 * guard + side;

/** the linear system that mirrored configurations share */
export interface MappedSystem {
  readonly number: number;
  readonly open: OpenModeSystem;
  /** its modes at the dial position where they were decomposed last */
  port: PortModes | null;
}

export interface MappedConfiguration {
  readonly number: number;
  readonly configuration: Configuration;
  readonly system: MappedSystem;
  /** sign of each constant of the system */
  readonly signs: readonly number[];
  /** -1 for each state that is held mirrored (a reservoir whose bridge conducts in the negative half-cycle) */
  readonly flips: Float64Array;
  /** the lamp groups' guards */
  readonly guards: readonly Guard[];
  readonly ways: (MappedConfiguration | undefined)[];
}

export class ConfigurationMap {
  private readonly network: Network;
  private readonly dimmer: Dimmer;
  private readonly systems = new Map<string, MappedSystem>();
  private readonly configurations = new Map<string, MappedConfiguration>();

  constructor(network: Network, dimmer: Dimmer) {
    this.network = network;
    this.dimmer = dimmer;
  }

  private system(configuration: Configuration, key: string): MappedSystem {
    const known = this.systems.get(key);
    if (known !== undefined) return known;
    const made: MappedSystem = { number: this.systems.size, open: openModeSystem(this.network, this.dimmer, configuration), port: null };
    this.systems.set(key, made);
    return made;
  }

  place(configuration: Configuration): MappedConfiguration {
    const key = linearKey(configuration);
    const fullKey = `${key}|${signKey(configuration)}`;
    const known = this.configurations.get(fullKey);
    if (known !== undefined) return known;
    const signs = [configuration.triacSign, configuration.diacSign, ...configuration.groups.map((g) => g.sign)];
    const flips = numbers(this.network.states).fill(1);
    this.network.groups.forEach((part, k) => {
      if (part.reservoir !== null) flips[part.reservoir.state] = signs[GROUP_CONSTANTS + k] as number;
    });
    const guards = groupGuards(this.network, configuration);
    const made: MappedConfiguration = {
      number: this.configurations.size,
      configuration,
      system: this.system(configuration, key),
      signs,
      flips,
      guards,
      ways: new Array(SWITCHINGS.length + 2 * guards.length).fill(undefined),
    };
    this.configurations.set(fullKey, made);
    return made;
  }

  /** where a way out leads */
  beyond(from: MappedConfiguration, way: number): MappedConfiguration {
    const known = from.ways[way];
    if (known !== undefined) return known;
    const made = this.place(changed(from, way));
    from.ways[way] = made;
    return made;
  }
}

function changed({ configuration, guards }: MappedConfiguration, way: number): Configuration {
  if (way < SWITCHINGS.length) return { ...configuration, ...SWITCHINGS[way] };
  const crossing = way - SWITCHINGS.length;
  const guard = guards[crossing >> 1] as Guard;
  const change = crossing % 2 === 0 ? guard.belowLower : guard.aboveUpper;
  if (change === null) throw new Error('crossed a guard that has nothing beyond it');
  return change(configuration);
}
