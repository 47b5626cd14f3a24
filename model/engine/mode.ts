/**
 * A mode: one configuration's linear system in modal coordinates, ready to be stepped. Between switchings the state is
 *   x(t) = basis * z(t) + (particular solution of the mains sine) + (constant particular solution),
 * where each modal coordinate only decays or rotates. The mains is carried as one more undamped pair (cos wt, sin wt), so every output
 * is one dot product with the coordinates plus a constant.
 *
 * Steps come from a ladder h = shortest * 2^level. For each level the mode holds the factor of every coordinate, and how far one
 * coordinate of unit size can stray from the chord over such a step: |lambda|^2 h^2 / 8 where that is small ("slow", a bound on the
 * curvature), or its whole range where it is not ("fast").
 */
import { type Configuration, type Guard, groupGuards, linearKey, signKey } from '../circuit/configuration.ts';
import { closeModeSystem, GROUP_CONSTANTS, type ModeSystem, type OpenModeSystem, openModeSystem } from '../circuit/mode-system.ts';
import type { Network } from '../circuit/network.ts';
import type { Dimmer } from '../pairing.ts';
import { GUARD_SLACK, LADDER_LEVELS } from '../tolerances.ts';
import { type ModalBasis, modalBasis } from './eigen.ts';

export const LEVELS = LADDER_LEVELS + 1;
/** largest |lambda| h that still counts as slow: there |lambda|^2 h^2 / 8 is 1, the range of a decaying coordinate */
const SLOW_LIMIT = Math.sqrt(8);

/** what the triac or the diac can switch to */
export const SWITCHINGS = [
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

/** what mirrored modes share */
export interface LinearMode {
  readonly states: number;
  readonly outputs: number;
  readonly modal: ModalBasis;
  /** coordinates: reals, pairs (re, im), mains (cos, sin) */
  readonly coordinates: number;
  /** terms: reals, pairs, mains: what has a size of its own */
  readonly terms: number;
  readonly decay: Float64Array;
  readonly rotation: Float64Array;
  /** per output: its share of each real coordinate, then for each pair its shares of re and im and the size of the two together */
  readonly outputRows: Float64Array;
  readonly outputStride: number;
  /** particular solution of the mains: x = driveCos * cos wt + driveSin * sin wt */
  readonly driveCos: Float64Array;
  readonly driveSin: Float64Array;
  /** constants x states, and constants x outputs */
  readonly constantStates: Float64Array;
  readonly constantOutputs: Float64Array;
  /** levels x coordinates (a pair: re, im of its factor) */
  readonly factors: Float64Array;
  /** levels x terms: curvature bound over 8 of a term of unit size where it is slow at that level, its whole range where it is fast */
  readonly bends: Float64Array;
  readonly ranges: Float64Array;
  /** some coordinate grows (a falling lamp curve) */
  readonly grows: boolean;
}

/** windows on outputs, one per guard */
export interface Windows {
  readonly output: Int32Array;
  readonly lower: Float64Array;
  readonly upper: Float64Array;
  /** how far outside its window a guard may be before it counts as outside: rounding of the quantity, V or A */
  readonly slack: Float64Array;
}

export interface Mode {
  readonly linear: LinearMode;
  readonly configuration: Configuration;
  /** constant particular solution of the states, and the constant part of every output, with this mode's signs */
  readonly restState: Float64Array;
  readonly restOutput: Float64Array;
  /** -1 for each state that is held mirrored (a reservoir whose bridge conducts in the negative half-cycle) */
  readonly flips: Float64Array;
  /** the lamp groups' guards; the windows below hold them first, then room for the diac's and the triac's */
  readonly guards: readonly Guard[];
  readonly windows: Windows;
  /** ways out by crossing a guard, filled in as they are met: [2 g] below its lower bound, [2 g + 1] above its upper */
  readonly neighbours: (Passage | undefined)[];
  /** modes reached by the triac's or the diac's switching, likewise, by Switching */
  readonly switched: (Passage | undefined)[];
  /** level at which the previous visit's first step was accepted: where the next visit starts trying */
  startLevel: number;
}

/** the way from one mode into another: new coordinates = matrix * (old coordinates with the mains' cos and sin, 1), n x (n + 3) */
export interface Passage {
  readonly to: Mode;
  readonly matrix: Float64Array;
}

function passageBetween(from: Mode, to: Mode): Passage {
  const n = from.linear.states;
  const { basis } = from.linear.modal;
  const { inverse } = to.linear.modal;
  const width = n + 3;
  // the state in terms of the old coordinates, mirrored as the new mode holds it, less the new mode's particular solutions
  const state = new Float64Array(n * width);
  for (let r = 0; r < n; r++) {
    const flip = (from.flips[r] as number) * (to.flips[r] as number);
    const at = r * width;
    for (let c = 0; c < n; c++) state[at + c] = flip * (basis[r * n + c] as number);
    state[at + n] = flip * (from.linear.driveCos[r] as number) - (to.linear.driveCos[r] as number);
    state[at + n + 1] = flip * (from.linear.driveSin[r] as number) - (to.linear.driveSin[r] as number);
    state[at + n + 2] = flip * (from.restState[r] as number) - (to.restState[r] as number);
  }
  const matrix = new Float64Array(n * width);
  for (let r = 0; r < n; r++) {
    for (let k = 0; k < n; k++) {
      const share = inverse[r * n + k] as number;
      for (let c = 0; c < width; c++) matrix[r * width + c] = (matrix[r * width + c] as number) + share * (state[k * width + c] as number);
    }
  }
  return { to, matrix };
}

/** sum over k < n of a[from + k * stride] * b[fromB + k * strideB] */
function dot(a: Float64Array, from: number, stride: number, b: Float64Array, fromB: number, strideB: number, n: number): number {
  let sum = 0;
  for (let k = 0, p = from, q = fromB; k < n; k++, p += stride, q += strideB) sum += (a[p] as number) * (b[q] as number);
  return sum;
}

/** modal coordinates of a column of the system */
function inModes(system: ModeSystem, modal: ModalBasis, column: number): Float64Array {
  const n = system.states;
  const b = new Float64Array(n);
  for (let r = 0; r < n; r++) b[r] = dot(modal.inverse, r * n, 1, system.rows, column, system.columns, n);
  return b;
}

/** states of modal coordinates, written from `to` on */
function toStates(modal: ModalBasis, z: Float64Array, n: number, into: Float64Array, to: number): void {
  for (let r = 0; r < n; r++) into[to + r] = dot(modal.basis, r * n, 1, z, 0, 1, n);
}

/**
 * Particular solution of the mains sine: (j omega - Lambda) Z = beta in real coordinates and 2 x 2 blocks; x = Im(X e^{j omega t}) =
 * Re X sin + Im X cos.
 */
function driveAnswer(system: ModeSystem, modal: ModalBasis, omega: number): { driveCos: Float64Array; driveSin: Float64Array } {
  const n = system.states;
  const b = inModes(system, modal, n);
  const zRe = new Float64Array(n);
  const zIm = new Float64Array(n);
  for (let k = 0; k < modal.reals; k++) {
    const d = modal.decay[k] as number;
    const square = d * d + omega * omega;
    zRe[k] = (-d * (b[k] as number)) / square;
    zIm[k] = (-omega * (b[k] as number)) / square;
  }
  for (let p = 0; p < modal.pairs; p++) {
    const k = modal.reals + 2 * p;
    const d = modal.decay[modal.reals + p] as number;
    const q = modal.rotation[modal.reals + p] as number;
    const b1 = b[k] as number;
    const b2 = b[k + 1] as number;
    const detRe = d * d - omega * omega + q * q;
    const detIm = -2 * d * omega;
    const square = detRe * detRe + detIm * detIm;
    const firstRe = -d * b1 - q * b2;
    const secondRe = q * b1 - d * b2;
    zRe[k] = (firstRe * detRe + omega * b1 * detIm) / square;
    zIm[k] = (omega * b1 * detRe - firstRe * detIm) / square;
    zRe[k + 1] = (secondRe * detRe + omega * b2 * detIm) / square;
    zIm[k + 1] = (omega * b2 * detRe - secondRe * detIm) / square;
  }
  const driveSin = new Float64Array(n);
  const driveCos = new Float64Array(n);
  toStates(modal, zRe, n, driveSin, 0);
  toStates(modal, zIm, n, driveCos, 0);
  return { driveCos, driveSin };
}

/** particular solutions of the constants, constants x states */
function constantAnswers(system: ModeSystem, modal: ModalBasis): Float64Array {
  const n = system.states;
  const states = new Float64Array(system.constants * n);
  for (let k = 0; k < system.constants; k++) {
    const c = inModes(system, modal, n + 1 + k);
    for (let r = 0; r < modal.reals; r++) c[r] = (c[r] as number) === 0 ? 0 : -(c[r] as number) / (modal.decay[r] as number);
    for (let p = 0; p < modal.pairs; p++) {
      const r = modal.reals + 2 * p;
      const d = modal.decay[modal.reals + p] as number;
      const q = modal.rotation[modal.reals + p] as number;
      const c1 = c[r] as number;
      const c2 = c[r + 1] as number;
      c[r] = -(d * c1 + q * c2) / (d * d + q * q);
      c[r + 1] = -(d * c2 - q * c1) / (d * d + q * q);
    }
    toStates(modal, c, n, states, k * n);
  }
  return states;
}

export function linearMode(system: ModeSystem, omega: number, shortest: number): LinearMode {
  const n = system.states;
  const { columns, outputs, constants } = system;
  const matrix = new Float64Array(n * n);
  for (let r = 0; r < n; r++) for (let c = 0; c < n; c++) matrix[r * n + c] = system.rows[r * columns + c] as number;
  const modal = modalBasis(matrix, n);
  const { reals, pairs } = modal;
  const terms = reals + pairs + 1;
  const coordinates = n + 2;
  const decay = new Float64Array(terms);
  const rotation = new Float64Array(terms);
  decay.set(modal.decay);
  rotation.set(modal.rotation);
  rotation[terms - 1] = omega;
  const { driveSin, driveCos } = driveAnswer(system, modal, omega);
  const constantStates = constantAnswers(system, modal);

  const outputStride = reals + 3 * (pairs + 1);
  const outputRows = new Float64Array(outputs * outputStride);
  const constantOutputs = new Float64Array(constants * outputs);
  for (let o = 0; o < outputs; o++) {
    const row = (n + o) * columns;
    let at = o * outputStride;
    for (let k = 0; k < reals; k++) outputRows[at++] = dot(system.rows, row, 1, modal.basis, k, n, n);
    for (let p = 0; p <= pairs; p++) {
      const k = reals + 2 * p;
      const drive = p === pairs;
      const re = drive ? dot(system.rows, row, 1, driveCos, 0, 1, n) : dot(system.rows, row, 1, modal.basis, k, n, n);
      const im = drive
        ? dot(system.rows, row, 1, driveSin, 0, 1, n) + (system.rows[row + n] as number)
        : dot(system.rows, row, 1, modal.basis, k + 1, n, n);
      outputRows[at++] = re;
      outputRows[at++] = im;
      outputRows[at++] = Math.sqrt(re * re + im * im);
    }
    for (let k = 0; k < constants; k++) {
      const own = system.rows[row + n + 1 + k] as number;
      constantOutputs[k * outputs + o] = dot(system.rows, row, 1, constantStates, k * n, 1, n) + own;
    }
  }

  const factors = new Float64Array(LEVELS * coordinates);
  const bends = new Float64Array(LEVELS * terms);
  const ranges = new Float64Array(LEVELS * terms);
  for (let t = 0; t < terms; t++) {
    const d = decay[t] as number;
    const q = rotation[t] as number;
    const speed = Math.sqrt(d * d + q * q);
    const k = t < reals ? t : reals + 2 * (t - reals);
    // each level's factor is the square of the one below: rounding doubles 17 times, to 1e-11
    let re = Math.exp(d * shortest) * Math.cos(q * shortest);
    let im = Math.exp(d * shortest) * Math.sin(q * shortest);
    let h = shortest;
    for (let level = 0; level < LEVELS; level++) {
      factors[level * coordinates + k] = re;
      if (t >= reals) factors[level * coordinates + k + 1] = im;
      const growth = d > 0 ? Math.exp(d * h) : 1;
      if (speed * h <= SLOW_LIMIT) bends[level * terms + t] = (growth * speed * speed) / 8;
      else ranges[level * terms + t] = q === 0 ? growth : 2 * growth;
      const square = re * re - im * im;
      im *= 2 * re;
      re = square;
      h *= 2;
    }
  }
  return {
    states: n,
    outputs,
    modal,
    coordinates,
    terms,
    decay,
    rotation,
    outputRows,
    outputStride,
    driveCos,
    driveSin,
    constantStates,
    constantOutputs,
    factors,
    bends,
    ranges,
    grows: decay.some((d) => d > 0),
  };
}

/** guards besides the lamp groups': the diac's and the triac's */
const OTHER_GUARDS = 2;

function windowsOf(guards: readonly Guard[], slack: number): Windows {
  const size = guards.length + OTHER_GUARDS;
  const windows: Windows = {
    output: new Int32Array(size),
    lower: new Float64Array(size),
    upper: new Float64Array(size),
    slack: new Float64Array(size).fill(slack),
  };
  guards.forEach((guard, g) => {
    windows.output[g] = guard.output;
    windows.lower[g] = guard.lower;
    windows.upper[g] = guard.upper;
  });
  return windows;
}

/** The modes of one circuit at one dial position, built when first met. `shared` holds what does not depend on the dial. */
export class ModeShelf {
  private readonly network: Network;
  private readonly dimmer: Dimmer;
  private readonly timingResistance: number;
  private readonly shared: Map<string, OpenModeSystem>;
  private readonly shortest: number;
  private readonly linear = new Map<string, LinearMode>();
  private readonly modes = new Map<string, Mode>();
  built = 0;

  constructor(network: Network, dimmer: Dimmer, timingResistance: number, shared: Map<string, OpenModeSystem>, shortest: number) {
    this.network = network;
    this.dimmer = dimmer;
    this.timingResistance = timingResistance;
    this.shared = shared;
    this.shortest = shortest;
  }

  private linearFor(configuration: Configuration, key: string): LinearMode {
    const known = this.linear.get(key);
    if (known !== undefined) return known;
    let open = this.shared.get(key);
    if (open === undefined) {
      open = openModeSystem(this.network, this.dimmer, configuration);
      this.shared.set(key, open);
    }
    const made = linearMode(closeModeSystem(open, this.timingResistance), this.network.omega, this.shortest);
    this.linear.set(key, made);
    this.built++;
    return made;
  }

  mode(configuration: Configuration): Mode {
    const key = linearKey(configuration);
    const fullKey = `${key}|${signKey(configuration)}`;
    const known = this.modes.get(fullKey);
    if (known !== undefined) return known;
    const linear = this.linearFor(configuration, key);
    const { states, outputs } = linear;
    const signs = [configuration.triacSign, configuration.diacSign, ...configuration.groups.map((g) => g.sign)];
    const restState = new Float64Array(states);
    const restOutput = new Float64Array(outputs);
    signs.forEach((sign, k) => {
      for (let s = 0; s < states; s++) restState[s] = (restState[s] as number) + sign * (linear.constantStates[k * states + s] as number);
      for (let o = 0; o < outputs; o++)
        restOutput[o] = (restOutput[o] as number) + sign * (linear.constantOutputs[k * outputs + o] as number);
    });
    const flips = new Float64Array(states).fill(1);
    this.network.groups.forEach((part, k) => {
      if (part.reservoir !== null) flips[part.reservoir.state] = signs[GROUP_CONSTANTS + k] as number;
    });
    const guards = groupGuards(this.network, configuration);
    const made: Mode = {
      linear,
      configuration,
      restState,
      restOutput,
      flips,
      guards,
      windows: windowsOf(guards, GUARD_SLACK * this.network.peak),
      neighbours: new Array(2 * guards.length).fill(undefined),
      switched: new Array(SWITCHINGS.length).fill(undefined),
      startLevel: 6,
    };
    this.modes.set(fullKey, made);
    return made;
  }

  /** the way on when the triac or the diac switches */
  after(from: Mode, switching: Switching): Passage {
    const known = from.switched[switching];
    if (known !== undefined) return known;
    const passage = passageBetween(from, this.mode({ ...from.configuration, ...SWITCHINGS[switching] }));
    from.switched[switching] = passage;
    return passage;
  }

  /** the way on beyond a group guard's bound; side 0 below its lower bound, 1 above its upper */
  beyond(from: Mode, guard: number, side: 0 | 1): Passage {
    const known = from.neighbours[2 * guard + side];
    if (known !== undefined) return known;
    const g = from.guards[guard] as Guard;
    const change = side === 0 ? g.belowLower : g.aboveUpper;
    if (change === null) throw new Error('crossed a guard that has nothing beyond it');
    const passage = passageBetween(from, this.mode(change(from.configuration)));
    from.neighbours[2 * guard + side] = passage;
    return passage;
  }
}
