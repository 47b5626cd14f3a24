/**
 * Remembers the walks of the last half-cycles: where each began, how it ended, and how far from it another may begin and still need no
 * proof of its own. A circuit that settles, or repeats itself over several half-cycles, walks nearly the same way again and again.
 *
 * Two walks through one mode under the same windows that begin d apart stay together: a coordinate only decays or rotates, so an output y
 * differs by no more than
 *   sum over the terms of |share of y in the term| * |d in the term|    (times the growth of what grows),
 * and a walk that was certain by more than that for every guard makes the other one certain too.
 */
import { numbers } from '../numbers.ts';
import { REMEMBERED_IN_VAIN, REMEMBERED_PATHS, REMEMBERED_WALKS } from '../tolerances.ts';
import type { GuardWatch } from './guard-watch.ts';
import type { Mode } from './mode.ts';

/** A walk's record. Times in s after its start: how far it was proven (-1: not at all), from when on its crossing is the only one, and
 * its crossing; the guard that was crossed (-1: none) and on which side (0 lower, 1 upper); a guard that began on its bound and moved in
 * (-1: none); whether the factors to the crossing have been found yet (1) */
export const WALK_PROVEN = 0;
export const WALK_ALONE_FROM = 1;
export const WALK_CROSSING = 2;
export const WALK_GUARD = 3;
export const WALK_SIDE = 4;
export const WALK_ENTERING = 5;
export const WALK_FACTORED = 6;
export const WALK_START = 7;

/** the walks of one half-cycle, in order */
interface Path {
  mode: Mode | null;
  readonly start: Float64Array;
  readonly walks: number[];
}

/** how far ahead in the remembered half-cycle the next walk is looked for: an event more or less loses the thread only for a moment */
const AHEAD = 3;

export class WalkMemory {
  /** the walks' records, each from `at(walk)` on: the fields below, its coordinates at its start from WALK_START on, then the factors to its
   * crossing, then per guard what it had to spare */
  known = new Float64Array(0);
  /** where those factors and what the guards had to spare lie in a record */
  readonly factorsFrom: number;
  readonly sparesFrom: number;
  private readonly stride: number;
  private readonly modes: Mode[] = [];
  private readonly logics: number[] = [];
  /** walks are numbered from the beginning; the last REMEMBERED_WALKS are kept */
  private made = 0;
  private readonly paths: Path[] = [];
  private nextPath = 0;
  /** the half-cycle that is running, the remembered one that it is compared with, and how far along that it is */
  private running: Path;
  private compared: Path | null = null;
  private along = 0;
  private retracedCount = 0;
  /** half-cycles since the last one that was worth remembering; what wanders is left alone for a while */
  private inVain = 0;
  private rest = REMEMBERED_IN_VAIN;
  private resting = 0;

  constructor(coordinates: number, mostGuards: number) {
    this.factorsFrom = WALK_START + coordinates;
    this.sparesFrom = this.factorsFrom + coordinates;
    this.stride = this.sparesFrom + mostGuards;
    this.running = { mode: null, start: numbers(coordinates), walks: [] };
  }

  /** where a walk's numbers begin */
  at(walk: number): number {
    return (walk % REMEMBERED_WALKS) * this.stride;
  }

  /** for another dial position */
  forget(): void {
    this.made = 0;
    this.paths.length = 0;
    this.nextPath = 0;
    this.running.mode = null;
    this.compared = null;
    this.inVain = 0;
    this.rest = REMEMBERED_IN_VAIN;
    this.resting = 0;
  }

  /** a half-cycle begins: it will be compared with the one that began nearest */
  begin(mode: Mode, z: Float64Array): void {
    this.keepRunning();
    const { running, paths } = this;
    const n = running.start.length;
    for (let k = 0; k < n; k++) running.start[k] = z[k] as number;
    running.mode = mode;
    this.compared = null;
    this.along = 0;
    this.retracedCount = 0;
    let least = Number.POSITIVE_INFINITY;
    for (let p = 0; p < paths.length; p++) {
      const path = paths[p] as Path;
      if (path.mode !== mode) continue;
      let distance = 0;
      for (let k = 0; k < n; k++) distance += Math.abs((z[k] as number) - (path.start[k] as number));
      if (distance < least) {
        least = distance;
        this.compared = path;
      }
    }
  }

  /** a half-cycle that only retraced a remembered one is not remembered beside it */
  private keepRunning(): void {
    const { running, paths } = this;
    if (this.resting > 0) {
      this.resting--;
      running.walks.length = 0;
      return;
    }
    this.inVain = 2 * this.retracedCount >= running.walks.length ? 0 : this.inVain + 1;
    if (this.inVain >= REMEMBERED_IN_VAIN) {
      paths.length = 0;
      this.nextPath = 0;
      this.inVain = 0;
      this.rest *= 2;
      this.resting = this.rest;
      running.walks.length = 0;
      return;
    }
    if (running.mode !== null && running.walks.length > this.retracedCount) {
      if (paths.length < REMEMBERED_PATHS) {
        paths.push(running);
        this.running = { mode: null, start: numbers(running.start.length), walks: [] };
      } else {
        this.running = paths[this.nextPath] as Path;
        paths[this.nextPath] = running;
        this.nextPath = (this.nextPath + 1) % REMEMBERED_PATHS;
      }
    }
    this.running.walks.length = 0;
  }

  /** the remembered walk that the next one may resemble: in this mode, under these windows; -1 for none */
  candidate(mode: Mode, logic: number): number {
    const { compared } = this;
    if (compared === null) return -1;
    const { walks } = compared;
    const end = Math.min(walks.length, this.along + AHEAD);
    for (let k = this.along; k < end; k++) {
      const walk = walks[k] as number;
      const slot = walk % REMEMBERED_WALKS;
      if (walk + REMEMBERED_WALKS <= this.made || this.modes[slot] !== mode || this.logics[slot] !== logic) continue;
      this.along = k + 1;
      return walk;
    }
    return -1;
  }

  /** the running half-cycle took this remembered walk again */
  retraced(walk: number): void {
    this.running.walks.push(walk);
    this.retracedCount++;
  }

  get remembering(): boolean {
    return this.resting === 0;
  }

  /** room for a new walk, which begins here */
  record(mode: Mode, logic: number, z: Float64Array): number {
    const walk = this.made++;
    const at = this.at(walk);
    if (this.known.length < at + this.stride) {
      const more = new Float64Array(Math.min(Math.max(32 * this.stride, 2 * this.known.length), REMEMBERED_WALKS * this.stride));
      more.set(this.known);
      this.known = more;
    }
    const { known } = this;
    known[at + WALK_PROVEN] = -1;
    known[at + WALK_GUARD] = -1;
    const { coordinates } = mode.linear;
    for (let k = 0, to = at + WALK_START; k < coordinates; k++, to++) known[to] = z[k] as number;
    const slot = walk % REMEMBERED_WALKS;
    this.modes[slot] = mode;
    this.logics[slot] = logic;
    this.running.walks.push(walk);
    return walk;
  }

  /** the walk ends by crossing a guard, as the watch says */
  leave(walk: number, watch: GuardWatch, guard: number, side: 0 | 1): void {
    const { known } = this;
    const record = this.at(walk);
    known[record + WALK_GUARD] = guard;
    known[record + WALK_SIDE] = side;
    known[record + WALK_ALONE_FROM] = watch.aloneFrom;
    known[record + WALK_CROSSING] = watch.crossing;
    known[record + WALK_FACTORED] = 0;
    this.prove(walk, watch);
  }

  /** the walk is proven for as long as the watch says, with what the guards had to spare by then */
  prove(walk: number, { spares, guardCount, guards, entering, proven }: GuardWatch): void {
    const { known } = this;
    const record = this.at(walk);
    const { linear } = this.modes[walk % REMEMBERED_WALKS] as Mode;
    let share = 1;
    if (linear.grows) for (const d of linear.decay) if (d > 0) share = Math.min(share, Math.exp(-d * proven));
    for (let g = 0, to = record + this.sparesFrom; g < guardCount; g++, to++) known[to] = (spares[g] as number) * share;
    known[record + WALK_ENTERING] = entering < 0 ? -1 : (guards[entering] as number);
    known[record + WALK_PROVEN] = proven;
  }

  /** where the walk's crossing was found when it was last taken again, and the factors to there */
  noteCrossing(walk: number, at: number, factors: Float64Array): void {
    const { known, factorsFrom, sparesFrom } = this;
    const record = this.at(walk);
    known[record + WALK_CROSSING] = at;
    known[record + WALK_FACTORED] = 1;
    for (let k = factorsFrom; k < sparesFrom; k++) known[record + k] = factors[k - factorsFrom] as number;
  }
}
