/**
 * A mode: one configuration at one dial position, with its signs, ready to be walked; and the modes of a dial position, built when first
 * met, with the ways from one to the next.
 */
import type { Configuration } from '../circuit/configuration.ts';
import { closeModeSystem, portGain } from '../circuit/mode-system.ts';
import type { Network } from '../circuit/network.ts';
import { numbers } from '../numbers.ts';
import { GUARD_SLACK, LADDER_LEVELS } from '../tolerances.ts';
import type { ConfigurationMap, MappedConfiguration, MappedSystem } from './configuration-map.ts';
import { MOST_STATES, type ModalBasis, modalBasis } from './eigen.ts';
import { WINDOW_LOWER, WINDOW_REST, WINDOW_SLACK, WINDOW_STRIDE, WINDOW_UPPER } from './kernels.ts';
import { type LinearMode, linearMode } from './linear-mode.ts';
import { productOf } from './matrix-product.ts';
import { modesAtGain, portModes } from './port-modes.ts';

/** windows on outputs, one per guard: where the output's row begins, and a record of WINDOW_STRIDE numbers. The slack is how far outside
 * its window a guard may be before it counts as outside: rounding of the quantity, V or A */
export interface Windows {
  readonly rows: Int32Array;
  readonly records: Float64Array;
}

export interface Mode {
  readonly linear: LinearMode;
  readonly configuration: Configuration;
  readonly mapped: MappedConfiguration;
  /** constant particular solution of the states, then the constant part of every output, with this mode's signs */
  readonly rest: Float64Array;
  /** the lamp groups' guards come first, then there is room for the diac's and the triac's */
  readonly windows: Windows;
  /** the ways out, by ConfigurationMap's numbers, filled in as they are taken */
  readonly passages: (Passage | undefined)[];
  /** how many windows are watched, which of them is the triac's, and under which state of the triac's and the diac's logic they were last
   * set (DimmerRun's number for it) */
  guardCount: number;
  triacGuard: number;
  watchedUnder: number;
  /** level at which the previous visit's first step was accepted: where the next visit starts trying */
  startLevel: number;
}

/** the way from one mode into another: new coordinates = matrix * (old coordinates with the mains' cos and sin, 1), n x (n + 3) */
export interface Passage {
  readonly to: Mode;
  readonly matrix: Float64Array;
}

/** guards besides the lamp groups': the diac's and the triac's */
export const OTHER_GUARDS = 2;
/** level at which a mode's very first visit starts trying */
const FIRST_LEVEL = 6;

/** sets one window of a mode; bounds in V or A */
export function watchOutput({ linear, rest, windows }: Mode, guard: number, output: number, lower: number, upper: number): void {
  const at = guard * WINDOW_STRIDE;
  windows.rows[guard] = output * linear.outputStride;
  windows.records[at + WINDOW_LOWER] = lower;
  windows.records[at + WINDOW_UPPER] = upper;
  windows.records[at + WINDOW_REST] = rest[linear.states + output] as number;
}

/** sum over the parts of sign * answer to that part's constant */
function signedSum(answers: Float64Array, signs: readonly number[], length: number): Float64Array {
  const sum = numbers(length);
  for (let k = 0; k < signs.length; k++) {
    const sign = signs[k] as number;
    for (let s = 0; s < length; s++) sum[s] = (sum[s] as number) + sign * (answers[k * length + s] as number);
  }
  return sum;
}

/** scratch of the passage that is being made: the new mode's state in terms of the old coordinates */
const state = new Float64Array(MOST_STATES * (MOST_STATES + 3));

function passageBetween(from: Mode, to: Mode): Passage {
  const n = from.linear.states;
  const { basis } = from.linear.modal;
  const { inverse } = to.linear.modal;
  const width = n + 3;
  // the state in terms of the old coordinates, mirrored as the new mode holds it, less the new mode's particular solutions
  for (let r = 0; r < n; r++) {
    const flip = (from.mapped.flips[r] as number) * (to.mapped.flips[r] as number);
    const at = r * width;
    for (let c = 0; c < n; c++) state[at + c] = flip * (basis[r * n + c] as number);
    state[at + n] = flip * (from.linear.drive[r] as number) - (to.linear.drive[r] as number);
    state[at + n + 1] = flip * (from.linear.drive[n + r] as number) - (to.linear.drive[n + r] as number);
    state[at + n + 2] = flip * (from.rest[r] as number) - (to.rest[r] as number);
  }
  const matrix = numbers(n * width);
  productOf(n)(inverse, 0, n, n, state, 0, width, width, matrix, 0, width);
  return { to, matrix };
}

/** carried over from where the system was decomposed last if that can be done, else decomposed */
function modesAtResistance(system: MappedSystem, timingResistance: number, matrix: Float64Array, n: number): ModalBasis {
  const { open, port } = system;
  if (!open.hasPort) return modalBasis(matrix, n);
  const gain = portGain(open, timingResistance);
  const carried = port === null ? null : modesAtGain(port, gain, matrix, n);
  if (carried !== null) return carried;
  const modal = modalBasis(matrix, n);
  system.port = portModes(modal, gain, open);
  return modal;
}

/** The modes of one circuit at one dial position, built when first met. */
export class ModeShelf {
  private readonly network: Network;
  private readonly map: ConfigurationMap;
  private readonly timingResistance: number;
  private readonly linear: (LinearMode | undefined)[] = [];
  private readonly modes: (Mode | undefined)[] = [];
  built = 0;

  constructor(network: Network, map: ConfigurationMap, timingResistance: number) {
    this.network = network;
    this.map = map;
    this.timingResistance = timingResistance;
  }

  private linearFor(system: MappedSystem): LinearMode {
    const { number, open } = system;
    const known = this.linear[number];
    if (known !== undefined) return known;
    const { omega } = this.network;
    const made = linearMode(closeModeSystem(open, this.timingResistance), omega, Math.PI / omega / 2 ** LADDER_LEVELS, (matrix, n) =>
      modesAtResistance(system, this.timingResistance, matrix, n),
    );
    this.linear[number] = made;
    this.built++;
    return made;
  }

  private modeOf(mapped: MappedConfiguration): Mode {
    const known = this.modes[mapped.number];
    if (known !== undefined) return known;
    const linear = this.linearFor(mapped.system);
    const { guards } = mapped;
    const windows: Windows = {
      rows: new Int32Array(guards.length + OTHER_GUARDS),
      records: numbers((guards.length + OTHER_GUARDS) * WINDOW_STRIDE),
    };
    for (let at = WINDOW_SLACK; at < windows.records.length; at += WINDOW_STRIDE) windows.records[at] = GUARD_SLACK * this.network.peak;
    const made: Mode = {
      linear,
      configuration: mapped.configuration,
      mapped,
      rest: signedSum(linear.constantAnswers, mapped.signs, linear.states + linear.outputs),
      windows,
      passages: new Array(mapped.ways.length).fill(undefined),
      guardCount: guards.length,
      triacGuard: -1,
      watchedUnder: -1,
      startLevel: FIRST_LEVEL,
    };
    for (let g = 0; g < guards.length; g++) {
      const guard = guards[g] as (typeof guards)[number];
      watchOutput(made, g, guard.output, guard.lower, guard.upper);
    }
    this.modes[mapped.number] = made;
    return made;
  }

  mode(configuration: Configuration): Mode {
    return this.modeOf(this.map.place(configuration));
  }

  /** the way out of a mode, by ConfigurationMap's number */
  passage(from: Mode, way: number): Passage {
    const known = from.passages[way];
    if (known !== undefined) return known;
    const made = passageBetween(from, this.modeOf(this.map.beyond(from.mapped, way)));
    from.passages[way] = made;
    return made;
  }
}
