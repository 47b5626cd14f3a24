/**
 * Walks one mode from a state until a guard's window is left or a given time is reached. Certain, not only likely: a step is taken only
 * with GuardWatch's certificate, or when it is the ladder's shortest (76 ns). Where the certificate also says that a guard leaves once, the
 * crossing is located on the closed form. A walk that begins close to a remembered one needs no steps at all: it is as certain as that one was,
 * and its crossing is looked for where that one's was.
 *
 * How far the next step may reach follows from this one: how far a guard strays grows with h^2, how far it gets with h.
 */
import { numbers } from '../numbers.ts';
import { AS_KNOWN_SHARE, ROOT_SHARE } from '../tolerances.ts';
import { asked, END, ENOUGH, INSIDE, locateCrossing, moved, NUDGE, OFFSET, parts, SPAN, START, slopes } from './crossing.ts';
import { GuardWatch, MOST_RESERVE } from './guard-watch.ts';
import {
  AFTER,
  BEFORE,
  LOWER,
  REST,
  SLACK,
  UPPER,
  WATCHED_STRIDE,
  WINDOW_LOWER,
  WINDOW_REST,
  WINDOW_SLACK,
  WINDOW_STRIDE,
  WINDOW_UPPER,
} from './kernels.ts';
import { LEVELS } from './linear-mode.ts';
import type { Mode, Passage } from './mode.ts';
import {
  WALK_ALONE_FROM,
  WALK_CROSSING,
  WALK_ENTERING,
  WALK_FACTORED,
  WALK_GUARD,
  WALK_PROVEN,
  WALK_SIDE,
  WALK_START,
  WalkMemory,
} from './walk-memory.ts';

export type WalkOutcome = 'reached' | 'crossed' | 'out-of-steps';

/** tries at a remembered crossing before it is located from nothing */
const RETRACE_TRIES = 8;

/** how often 4 goes into a number: how many levels a step may be longer or shorter by; 0 where the number is below 4, or not one */
function powersOfFour(x: number): number {
  return x >= 4 ? (31 - Math.clz32(Math.min(x, MOST_RESERVE))) >> 1 : 0;
}

export class ModeWalk {
  /** after "crossed": which guard, and 0 for its lower bound, 1 for its upper */
  crossedGuard = -1;
  crossedSide: 0 | 1 = 0;
  /** time since the mode was entered */
  elapsed = 0;
  steps = 0;
  uncertified = 0;

  private mode!: Mode;
  private z: Float64Array;
  private zNext: Float64Array;
  private readonly zStart: Float64Array;
  private readonly watch: GuardWatch;
  private readonly memory: WalkMemory;
  /** remembered walk that begins close enough to the present moment, or -1; the caller's number for the windows there are */
  private followed = -1;
  private logic = -1;
  private level = 6;
  private firstStep = true;
  private readonly shortest: number;

  /** the ladder's shortest step, s; how many states and at most how many guards the circuit's modes have */
  constructor(shortest: number, states: number, mostGuards: number) {
    this.shortest = shortest;
    this.z = numbers(states + 2);
    this.zNext = numbers(states + 2);
    this.zStart = numbers(states + 2);
    this.watch = new GuardWatch(mostGuards);
    this.memory = new WalkMemory(states + 2, mostGuards);
  }

  /** forgets the walks of the half-cycles before */
  forget(): void {
    this.memory.forget();
  }

  /** starts a visit: x in the mode's own (mirrored) coordinates, the mains' cosine and sine at this moment */
  enter(mode: Mode, x: Float64Array, cos: number, sin: number): void {
    const { linear, rest } = mode;
    const n = linear.states;
    const { drive } = linear;
    const { inverse } = linear.modal;
    const { z, zStart, zNext } = this;
    this.start(mode);
    for (let k = 0; k < n; k++) {
      zNext[k] = (x[k] as number) - (rest[k] as number) - cos * (drive[k] as number) - sin * (drive[n + k] as number);
    }
    for (let r = 0, at = 0; r < n; r++) {
      let sum = 0;
      for (let c = 0; c < n; c++, at++) sum += (inverse[at] as number) * (zNext[c] as number);
      z[r] = sum;
      zStart[r] = sum;
    }
    z[n] = cos;
    z[n + 1] = sin;
    zStart[n] = cos;
    zStart[n + 1] = sin;
    this.memory.begin(mode, z);
  }

  /** goes over to a neighbouring mode at this moment: the state is the same, its coordinates are the new mode's */
  pass({ to, matrix }: Passage): void {
    to.linear.kernels.pass(this.z, this.zNext, this.zStart, matrix);
    this.takeNext();
    this.start(to);
  }

  private start(mode: Mode): void {
    this.mode = mode;
    this.elapsed = 0;
    this.level = mode.startLevel;
    this.firstStep = true;
  }

  /** value of an output now */
  value(output: number): number {
    const { linear, rest } = this.mode;
    linear.kernels.value(slopes, this.z, linear.outputRows, output * linear.outputStride);
    return (rest[linear.states + output] as number) + (slopes[0] as number);
  }

  /** the state now, in the mode's own coordinates */
  leave(x: Float64Array): void {
    const { linear, rest } = this.mode;
    const n = linear.states;
    const { basis } = linear.modal;
    const { drive } = linear;
    const { z } = this;
    const cos = z[n] as number;
    const sin = z[n + 1] as number;
    for (let r = 0, at = 0; r < n; r++) {
      let sum = (rest[r] as number) + cos * (drive[r] as number) + sin * (drive[n + r] as number);
      for (let c = 0; c < n; c++, at++) sum += (basis[at] as number) * (z[c] as number);
      x[r] = sum;
    }
  }

  /** coordinates at the visit's start: with `elapsed` they give everything that happened since, in closed form */
  startCoordinates(into: Float64Array): void {
    for (let k = 0; k < this.mode.linear.coordinates; k++) into[k] = this.zStart[k] as number;
  }

  /**
   * Takes stock at this moment, the mode having so many windows, set as `logic` (the caller's number) says. False where a guard is outside by
   * more than its slack (crossedGuard, crossedSide). True where all are inside: that is known without looking where a remembered walk began so
   * near that this one needs no proof of its own.
   */
  begin(guardCount: number, logic: number): boolean {
    this.watch.guardCount = guardCount;
    this.logic = logic;
    this.followed = this.memory.candidate(this.mode, logic);
    if (this.followed >= 0 && this.isNear(this.followed)) return true;
    this.followed = -1;
    return this.takeStock();
  }

  private takeStock(): boolean {
    const { watch } = this;
    if (watch.begin(this.mode, this.z, this.level)) return true;
    this.crossedGuard = watch.outsideGuard;
    this.crossedSide = watch.outsideSide;
    return false;
  }

  /** whether what a remembered walk had to spare covers the difference between its beginning and this moment */
  private isNear(walk: number): boolean {
    const { memory } = this;
    const { linear, windows } = this.mode;
    const { known } = memory;
    const at = memory.at(walk);
    if ((known[at + WALK_PROVEN] as number) < 0) return false;
    const spares = at + memory.sparesFrom;
    if (!linear.kernels.near(this.z, known, at + WALK_START, spares, linear.outputRows, windows.rows, this.watch.guardCount)) return false;
    const entering = known[at + WALK_ENTERING] as number;
    if (entering < 0) return true;
    const window = entering * WINDOW_STRIDE;
    linear.kernels.value(slopes, this.z, linear.outputRows, windows.rows[entering] as number);
    const y = (slopes[0] as number) + (windows.records[window + WINDOW_REST] as number);
    const slack = windows.records[window + WINDOW_SLACK] as number;
    const lower = windows.records[window + WINDOW_LOWER] as number;
    const upper = windows.records[window + WINDOW_UPPER] as number;
    return y >= lower - slack && y <= upper + slack;
  }

  /** takes the remembered walk again from here; null where it leads elsewhere */
  private retrace(end: number): WalkOutcome | null {
    const { memory, z } = this;
    const { known } = memory;
    const record = memory.at(this.followed);
    const remaining = end - this.elapsed;
    const guard = known[record + WALK_GUARD] as number;
    const from = known[record + WALK_ALONE_FROM] as number;
    const proven = known[record + WALK_PROVEN] as number;
    if (remaining <= (guard < 0 ? proven : from)) {
      memory.retraced(this.followed);
      if (remaining > 0) this.settleAt(end);
      return 'reached';
    }
    if (guard < 0) return null;
    const { linear, windows } = this.mode;
    const { kernels, decay, rotation } = linear;
    const window = guard * WINDOW_STRIDE;
    const side = known[record + WALK_SIDE] === 0 ? 0 : 1;
    const bound = windows.records[window + (side === 0 ? WINDOW_LOWER : WINDOW_UPPER)] as number;
    const offset = (windows.records[window + WINDOW_REST] as number) - bound;
    const enough = ROOT_SHARE * (windows.records[window + WINDOW_SLACK] as number);
    const factors = record + memory.factorsFrom;
    const row = windows.rows[guard] as number;
    let at = known[record + WALK_CROSSING] as number;
    this.crossedGuard = guard;
    this.crossedSide = side;
    const isFactored = known[record + WALK_FACTORED] === 1;
    if (isFactored) {
      // what has settled crosses just where it did
      kernels.move(this.zNext, z, known, factors);
      kernels.value(slopes, this.zNext, linear.outputRows, row);
      if (Math.abs((slopes[0] as number) + offset) <= AS_KNOWN_SHARE * enough) return this.retraced(end, at);
    }
    const near = NUDGE / linear.fastest;
    kernels.takeApart(parts, slopes, z, decay, rotation, linear.outputRows, row);
    if (isFactored) kernels.recall(slopes, moved, parts, known, factors);
    else kernels.probe(slopes, moved, parts, decay, rotation, at);
    for (let tries = 0; tries < RETRACE_TRIES; tries++) {
      const f = (slopes[0] as number) + offset;
      if (Math.abs(f) <= (tries === 0 ? AS_KNOWN_SHARE * enough : enough)) {
        // the next one will cross about here
        memory.noteCrossing(this.followed, at, moved);
        kernels.move(this.zNext, z, moved, 0);
        return this.retraced(end, at);
      }
      const by = -f / (slopes[1] as number);
      at += by;
      if (!(at > from && at <= proven)) return null;
      if (Math.abs(by) < near) kernels.nudge(slopes, moved, parts, decay, rotation, by);
      else kernels.probe(slopes, moved, parts, decay, rotation, at);
    }
    return null;
  }

  /** ends a walk that was taken again so long after its start, at the coordinates in zNext, or at `end` if that comes first */
  private retraced(end: number, at: number): WalkOutcome {
    this.memory.retraced(this.followed);
    if (this.elapsed + at >= end) {
      this.settleAt(end);
      return 'reached';
    }
    this.takeNext();
    this.elapsed += at;
    return 'crossed';
  }

  private takeNext(): void {
    const kept = this.z;
    this.z = this.zNext;
    this.zNext = kept;
  }

  /** ends the walk at `elapsed`, computed from the visit's start so that no error adds up over the steps */
  private settleAt(elapsed: number): void {
    if (elapsed === this.elapsed) return;
    this.elapsed = elapsed;
    this.moveBy(elapsed, this.zStart);
    this.takeNext();
  }

  /** zNext = coordinates moved by a time that need not be on the ladder */
  private moveBy(time: number, from: Float64Array): void {
    const { kernels, decay, rotation } = this.mode.linear;
    kernels.factorsAfter(moved, decay, rotation, time);
    kernels.move(this.zNext, from, moved, 0);
  }

  /**
   * Walks on until `end` (time since the visit's start) or until a guard is crossed; `begin` has taken stock. `stepBudget` bounds the
   * trial steps. With `force` the first step is one shortest step whatever the guards say: how the caller breaks a standstill.
   */
  walk(end: number, stepBudget: number, force = false): WalkOutcome {
    if (this.followed >= 0) {
      this.steps++;
      const outcome = force ? null : this.retrace(end);
      if (outcome !== null) return outcome;
      if (!this.takeStock()) return 'crossed';
    }
    const { watch, mode, memory } = this;
    const { kernels, factors, coordinates, outputRows, grows } = mode.linear;
    const { records, rows, count } = watch;
    /** the walk will be remembered, if it is proven to its end */
    let remembered = force || !memory.remembering ? -1 : memory.record(mode, this.logic, this.z);
    watch.sparing = remembered >= 0;
    let forced = force;
    let level = forced ? 0 : this.level;
    /** level for which the guards' bounds were last taken, and whether that was at the present moment */
    let boundsLevel = this.level;
    let boundsFresh = true;
    for (let budget = stepBudget; budget > 0; budget--) {
      const remaining = end - this.elapsed;
      if (count === 0 || remaining <= 0) {
        this.level = level;
        if (remembered >= 0 && count === 0) {
          watch.proven = Number.POSITIVE_INFINITY;
          memory.prove(remembered, watch);
        }
        if (remaining > 0) this.settleAt(end);
        return 'reached';
      }
      this.steps++;
      const h = this.shortest * (1 << level);
      watch.tried = h;
      kernels.step(this.z, this.zNext, factors, level * coordinates, outputRows, records, rows, count);
      if (grows) {
        // what grows outgrows its bounds
        watch.takeBounds(this.z, level);
        boundsFresh = true;
        boundsLevel = level;
      }
      let certain = watch.certify();
      if (!certain && !(boundsFresh && boundsLevel <= level)) {
        // the bounds may only be out of date
        watch.takeBounds(this.z, level);
        boundsFresh = true;
        boundsLevel = level;
        certain = watch.certify();
      }
      if (forced) {
        watch.suspectCount = 0;
        certain = true;
        forced = false;
        this.uncertified++;
      }
      if (!certain) {
        if (level > 0) {
          level = Math.max(0, level - 1 - powersOfFour(0.25 / watch.reserve));
          continue;
        }
        this.uncertified++;
        remembered = -1;
      }
      if (watch.suspectCount > 0) {
        this.level = level;
        const first = this.firstCrossing(level);
        const earliest = watch.crossings[first] as number;
        if (remembered >= 0 && earliest > 0) {
          watch.cross(first);
          memory.leave(remembered, watch, this.crossedGuard, this.crossedSide);
        }
        if (earliest >= remaining) {
          this.settleAt(end);
          return 'reached';
        }
        if (earliest > 0) {
          this.elapsed += earliest;
          this.takeNext();
        }
        return 'crossed';
      }
      if (this.firstStep) {
        this.mode.startLevel = level;
        this.firstStep = false;
      }
      watch.accept();
      if (h >= remaining) {
        this.level = level;
        if (remembered >= 0) {
          watch.proven = watch.since;
          memory.prove(remembered, watch);
        }
        this.settleAt(end);
        return 'reached';
      }
      this.elapsed += h;
      this.takeNext();
      boundsFresh = false;
      level = Math.min(LEVELS - 1, level + 1 + powersOfFour(watch.reserve / 4));
    }
    return 'out-of-steps';
  }

  /** Locates the suspects' crossings within the step that was just tried. Returns which of them is the first, and leaves the coordinates
   * there in zNext. */
  private firstCrossing(level: number): number {
    const { z } = this;
    const { records, suspects, suspectCount, crossings, rows, guards, tried } = this.watch;
    const { linear } = this.mode;
    let earliest = Number.POSITIVE_INFINITY;
    let first = 0;
    asked[SPAN] = tried;
    for (let k = 0; k < suspectCount; k++) {
      const w = suspects[k] as number;
      const record = w * WATCHED_STRIDE;
      const side = (records[record + AFTER] as number) < (records[record + LOWER] as number) ? 0 : 1;
      const bound = records[record + (side === 0 ? LOWER : UPPER)] as number;
      const inside = side === 0 ? 1 : -1;
      const before = ((records[record + BEFORE] as number) - bound) * inside;
      asked[INSIDE] = inside;
      asked[START] = before;
      asked[END] = ((records[record + AFTER] as number) - bound) * inside;
      asked[OFFSET] = (records[record + REST] as number) - bound;
      asked[ENOUGH] = ROOT_SHARE * (records[record + SLACK] as number);
      if (before <= 0) crossings[k] = 0;
      else locateCrossing(linear, z, rows[w] as number, level, crossings, k);
      const at = crossings[k] as number;
      if (at >= earliest) continue;
      earliest = at;
      first = k;
      this.crossedGuard = guards[w] as number;
      this.crossedSide = side;
    }
    if (first < suspectCount - 1) this.moveBy(earliest, z);
    else if (earliest > 0) linear.kernels.move(this.zNext, z, moved, 0);
    return first;
  }
}
