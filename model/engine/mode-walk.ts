/**
 * Walks one mode from a state until a guard's window is left or a given time is reached. Certain, not only likely: a step is taken only
 * when no guard can have left its window and come back inside it, or when it is the ladder's shortest (76 ns).
 *
 * Certificate for one guard over a step h, with values y0 and y1 at its ends and a bound M on |y''|: y stays above the parabola through
 * y0 and y1 with curvature M. With d = y1 - y0 and s = M h^2 / 8 its least value is min(y0, y1) where |d| >= 4 s, else
 * (y0 + y1)/2 - s - d^2/(16 s); likewise above. Terms too fast for that at this h are taken with their whole range. Where |d| >= 4 s, y is
 * also monotone, so a crossing inside the step is the only one, and a bracketed Newton iteration on the closed form finds it.
 *
 * How far the next step may reach follows from this one: s grows with h^2 and d with h.
 */
import { numbers } from '../numbers.ts';
import { EVENT_TIME, ROOT_SHARE } from '../tolerances.ts';
import { MOST_COORDINATES } from './eigen.ts';
import {
  AFTER,
  BEFORE,
  BEND,
  LOWER,
  RANGE,
  REST,
  SLACK,
  SPARE,
  UPPER,
  WATCHED_STRIDE,
  WINDOW_LOWER,
  WINDOW_REST,
  WINDOW_SLACK,
  WINDOW_STRIDE,
  WINDOW_UPPER,
} from './kernels.ts';
import { LEVELS, SLOW_LIMIT } from './linear-mode.ts';
import type { Mode, Passage } from './mode.ts';
import { ends, quinticRoot } from './quintic-root.ts';
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

/** share of a step over which the factors that count turn and decay so little that four terms of their series are exact to rounding */
const NUDGE = 1e-3;
/** reserve of a step that nothing bounds: more than the ladder is long */
const MOST_RESERVE = 1e9;

/** scratch of the crossing that is being located: an output's parts, factors, a slope and a curvature */
const parts = new Float64Array(3 * MOST_COORDINATES);
const moved = new Float64Array(MOST_COORDINATES);
const slopes = new Float64Array(2);

/** how often 4 goes into a number: how many levels a step may be longer or shorter by; 0 where the number is below 4, or not one */
function powersOfFour(x: number): number {
  return x >= 4 ? (31 - Math.clz32(Math.min(x, MOST_RESERVE))) >> 1 : 0;
}

export class ModeWalk {
  /** how many of the mode's windows are watched: set by the caller before `begin` */
  guardCount = 0;
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
  /** the guards on the watch: a record, an output's row and a guard's number each. Their bounds are valid from when they were taken on,
   * since what decays only gets smaller */
  private readonly watched: Float64Array;
  private readonly rows: Int32Array;
  private readonly guards: Int32Array;
  private watchedCount = 0;
  /** of the step last tried: guards (by their place on the watch) that certainly leave, once; square of the factor by which the step
   * could have been longer, over all guards */
  private readonly suspects: Int32Array;
  private suspectCount = 0;
  private readonly crossings: Float64Array;
  private reserve = 0;
  /** guard on the watch that begins the walk on its bound and moves in: -1 for none, -2 for more than one */
  private entering = -1;
  /** s after the visit's start: where the present walk began */
  private walkStart = 0;
  private readonly memory: WalkMemory;
  /** the present walk will be remembered if it can be proven; length of the step that was last tried, s */
  private keeping = false;
  private tried = 0;
  /** remembered walk that begins close enough to the present moment, or -1 */
  private followed = -1;
  private logic = -1;
  private readonly spares: Float64Array;
  private level = 6;
  private firstStep = true;
  private readonly shortest: number;

  /** the ladder's shortest step, s; how many states and at most how many guards the circuit's modes have */
  constructor(shortest: number, states: number, mostGuards: number) {
    this.shortest = shortest;
    this.z = numbers(states + 2);
    this.zNext = numbers(states + 2);
    this.zStart = numbers(states + 2);
    this.watched = numbers(mostGuards * WATCHED_STRIDE);
    this.rows = new Int32Array(mostGuards);
    this.guards = new Int32Array(mostGuards);
    this.suspects = new Int32Array(mostGuards);
    this.crossings = numbers(mostGuards);
    this.spares = numbers(mostGuards);
    this.memory = new WalkMemory(states + 2, mostGuards);
  }

  /** forgets the walks of the half-cycles before */
  forget(): void {
    this.memory.forget();
  }

  /** starts a visit: x in the mode's own (mirrored) coordinates, the mains' cosine and sine at this moment */
  enter(mode: Mode, x: Float64Array, cos: number, sin: number): void {
    const { linear, restState } = mode;
    const n = linear.states;
    const { driveCos, driveSin } = linear;
    const { inverse } = linear.modal;
    const { z, zStart, zNext } = this;
    this.start(mode);
    for (let k = 0; k < n; k++) {
      zNext[k] = (x[k] as number) - (restState[k] as number) - cos * (driveCos[k] as number) - sin * (driveSin[k] as number);
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
    return this.outputAt(output * this.mode.linear.outputStride, this.mode.restOutput[output] as number);
  }

  /** the same of the output with this row and this constant part */
  private outputAt(row: number, rest: number): number {
    const { outputRows, terms, modal } = this.mode.linear;
    const { reals } = modal;
    const { z } = this;
    let sum = rest;
    let at = row;
    for (let k = 0; k < reals; k++, at++) sum += (outputRows[at] as number) * (z[k] as number);
    for (let t = reals, k = reals; t < terms; t++, k += 2, at += 3) {
      sum += (outputRows[at] as number) * (z[k] as number) + (outputRows[at + 1] as number) * (z[k + 1] as number);
    }
    return sum;
  }

  /** the state now, in the mode's own coordinates */
  leave(x: Float64Array): void {
    const { linear, restState } = this.mode;
    const n = linear.states;
    const { basis } = linear.modal;
    const { driveCos, driveSin } = linear;
    const { z } = this;
    const cos = z[n] as number;
    const sin = z[n + 1] as number;
    for (let r = 0, at = 0; r < n; r++) {
      let sum = (restState[r] as number) + cos * (driveCos[r] as number) + sin * (driveSin[r] as number);
      for (let c = 0; c < n; c++, at++) sum += (basis[at] as number) * (z[c] as number);
      x[r] = sum;
    }
  }

  /** coordinates at the visit's start: with `elapsed` they give everything that happened since, in closed form */
  startCoordinates(into: Float64Array): void {
    for (let k = 0; k < this.mode.linear.coordinates; k++) into[k] = this.zStart[k] as number;
  }

  /** Whether a remembered walk began so near, under the same windows (the caller's number for them), that this one needs no proof of its
   * own: then no guard is outside, and `walk` will take it again. */
  recall(logic: number): boolean {
    const { memory, mode } = this;
    this.logic = logic;
    this.followed = -1;
    const walk = memory.candidate(mode, logic);
    if (walk < 0) return false;
    const at = memory.at(walk);
    const known = memory.numbers;
    if ((known[at + WALK_PROVEN] as number) < 0) return false;
    const { linear, windows } = mode;
    if (!linear.kernels.near(this.z, known, at + WALK_START, at + memory.sparesFrom, linear.outputRows, windows.rows, this.guardCount)) {
      return false;
    }
    const entering = known[at + WALK_ENTERING] as number;
    if (entering >= 0) {
      const y = this.outputAt(windows.rows[entering] as number, windows.records[entering * WINDOW_STRIDE + WINDOW_REST] as number);
      const slack = windows.records[entering * WINDOW_STRIDE + WINDOW_SLACK] as number;
      if (y < (windows.records[entering * WINDOW_STRIDE + WINDOW_LOWER] as number) - slack) return false;
      if (y > (windows.records[entering * WINDOW_STRIDE + WINDOW_UPPER] as number) + slack) return false;
    }
    this.followed = walk;
    return true;
  }

  /** takes the remembered walk again from here; null where it leads elsewhere */
  private retrace(end: number): WalkOutcome | null {
    const { memory, mode, z } = this;
    const walk = this.followed;
    const known = memory.numbers;
    const record = memory.at(walk);
    const remaining = end - this.elapsed;
    const guard = known[record + WALK_GUARD] as number;
    const from = known[record + WALK_ALONE_FROM] as number;
    const proven = known[record + WALK_PROVEN] as number;
    if (remaining <= (guard < 0 ? proven : from)) {
      memory.retraced(walk);
      if (remaining > 0) this.settleAt(end);
      return 'reached';
    }
    if (guard < 0) return null;
    const { linear, windows } = mode;
    const { kernels, decay, rotation } = linear;
    const window = guard * WINDOW_STRIDE;
    const side = known[record + WALK_SIDE] === 0 ? 0 : 1;
    const bound = windows.records[window + (side === 0 ? WINDOW_LOWER : WINDOW_UPPER)] as number;
    const offset = (windows.records[window + WINDOW_REST] as number) - bound;
    const enough = ROOT_SHARE * (windows.records[window + WINDOW_SLACK] as number);
    kernels.takeApart(parts, slopes, z, decay, rotation, linear.outputRows, windows.rows[guard] as number);
    let at = known[record + WALK_CROSSING] as number;
    const factors = record + memory.factorsFrom;
    let kept = known[record + WALK_FACTORED] === 1;
    if (kept) kernels.recall(slopes, moved, parts, known, factors);
    else kernels.probe(slopes, moved, parts, decay, rotation, at);
    const near = NUDGE * (proven - from);
    for (let k = 0; k < 8; k++) {
      const f = (slopes[0] as number) + offset;
      if (Math.abs(f) <= enough) {
        if (!kept) {
          // the next one will cross here, or nearer than there
          known[record + WALK_CROSSING] = at;
          known[record + WALK_FACTORED] = 1;
          for (let c = 0; c < linear.coordinates; c++) known[factors + c] = moved[c] as number;
        }
        memory.retraced(walk);
        if (at >= remaining) {
          this.settleAt(end);
          return 'reached';
        }
        kernels.move(this.zNext, z, moved, 0);
        this.takeNext();
        this.elapsed += at;
        this.crossedGuard = guard;
        this.crossedSide = side;
        return 'crossed';
      }
      const by = -f / (slopes[1] as number);
      at += by;
      if (!(at > from && at <= proven)) return null;
      kept = false;
      if (Math.abs(by) < near) kernels.nudge(slopes, moved, parts, decay, rotation, by);
      else kernels.probe(slopes, moved, parts, decay, rotation, at);
    }
    return null;
  }

  /**
   * Takes stock of the guards at this moment: their values, and which of them could leave their window at all, however long the visit.
   * Returns the first guard that is outside by more than its slack (crossedGuard, crossedSide), or -1.
   */
  begin(): number {
    const { linear, windows } = this.mode;
    const count = linear.kernels.begin(
      this.z,
      linear.bends,
      linear.ranges,
      this.level * linear.terms,
      linear.outputRows,
      windows.records,
      windows.rows,
      this.guardCount,
      linear.grows,
      this.watched,
      this.rows,
      this.guards,
      slopes,
      this.spares,
    );
    if (count >= 0) {
      this.watchedCount = count;
      return -1;
    }
    this.crossedGuard = ~count;
    this.crossedSide = slopes[0] === 0 ? 0 : 1;
    return ~count;
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

  /** bounds of every watched guard at this moment, for steps of this level */
  private takeBounds(level: number): void {
    const { kernels, bends, ranges, terms, outputRows } = this.mode.linear;
    kernels.bound(this.z, bends, ranges, level * terms, outputRows, this.watched, this.rows, this.watchedCount);
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
      if (this.begin() >= 0) return 'crossed';
    }
    const { memory, mode } = this;
    const { kernels, factors, coordinates, outputRows, grows } = mode.linear;
    const { watched, rows, watchedCount } = this;
    this.keeping = !force && memory.remembering;
    const kept = this.keeping ? memory.record(mode, this.logic, this.z) : -1;
    this.walkStart = this.elapsed;
    this.entering = -1;
    for (let w = 0, at = 0; w < watchedCount; w++, at += WATCHED_STRIDE) watched[at + SPARE] = Number.POSITIVE_INFINITY;
    let proven = this.keeping;
    let forced = force;
    let level = forced ? 0 : this.level;
    /** level for which the guards' bounds were last taken, and whether that was at the present moment */
    let boundsLevel = this.level;
    let boundsFresh = true;
    for (let budget = stepBudget; budget > 0; budget--) {
      const remaining = end - this.elapsed;
      if (watchedCount === 0 || remaining <= 0) {
        this.level = level;
        if (watchedCount === 0 && proven) this.remember(kept, Number.POSITIVE_INFINITY);
        if (remaining > 0) this.settleAt(end);
        return 'reached';
      }
      this.steps++;
      const h = this.shortest * (1 << level);
      this.tried = h;
      kernels.step(this.z, this.zNext, factors, level * coordinates, outputRows, watched, rows, watchedCount);
      if (grows) {
        // what grows outgrows its bounds
        this.takeBounds(level);
        boundsFresh = true;
        boundsLevel = level;
      }
      if (this.elapsed === this.walkStart) this.entering = -1;
      let certain = this.certify();
      if (!certain && !(boundsFresh && boundsLevel <= level)) {
        // the bounds may only be out of date
        this.takeBounds(level);
        boundsFresh = true;
        boundsLevel = level;
        if (this.elapsed === this.walkStart) this.entering = -1;
        certain = this.certify();
      }
      if (forced) {
        this.suspectCount = 0;
        certain = true;
        forced = false;
        this.uncertified++;
        proven = false;
      }
      if (!certain) {
        if (level > 0) {
          level = Math.max(0, level - 1 - powersOfFour(0.25 / this.reserve));
          continue;
        }
        this.uncertified++;
        proven = false;
      }
      if (this.suspectCount > 0) {
        this.level = level;
        const earliest = this.firstCrossing(level, h);
        if (proven && earliest > 0) this.rememberCrossing(kept, earliest);
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
      if (h >= remaining) {
        this.level = level;
        if (proven) {
          this.foldSpares();
          this.remember(kept, this.elapsed - this.walkStart + h);
        }
        this.settleAt(end);
        return 'reached';
      }
      this.elapsed += h;
      this.takeNext();
      boundsFresh = false;
      if (proven) this.foldSpares();
      for (let w = 0, at = 0; w < watchedCount; w++, at += WATCHED_STRIDE) watched[at + BEFORE] = watched[at + AFTER] as number;
      level = Math.min(LEVELS - 1, level + 1 + powersOfFour(this.reserve / 4));
    }
    return 'out-of-steps';
  }

  /** What a guard has to spare that begins a step on its bound and moves in: as much as its slope has, if that is the walk's first step,
   * since it does not come back; in any case another slack. */
  private spareEntering(w: number, left: number): void {
    const { watched } = this;
    const at = w * WATCHED_STRIDE;
    const before = watched[at + BEFORE] as number;
    const after = watched[at + AFTER] as number;
    const lower = watched[at + LOWER] as number;
    const upper = watched[at + UPPER] as number;
    watched[at + SPARE] = left + (watched[at + SLACK] as number);
    if (this.elapsed !== this.walkStart || (watched[at + RANGE] as number) > 0 || (this.entering !== -1 && this.entering !== w)) return;
    const steep = Math.abs(after - before) - 4 * (watched[at + BEND] as number) * this.tried * this.tried;
    let spare = steep / this.steepness();
    if (after >= lower && after <= upper) spare = Math.min(spare, after > before ? upper - after : after - lower);
    if (spare <= (watched[at + SPARE] as number)) return;
    this.entering = w;
    watched[at + SPARE] = spare;
  }

  private foldSpares(): void {
    const { watched, watchedCount, spares, guards } = this;
    for (let w = 0, at = 0; w < watchedCount; w++, at += WATCHED_STRIDE) {
      const g = guards[w] as number;
      const spare = watched[at + SPARE] as number;
      if (!(spare >= (spares[g] as number))) spares[g] = spare;
    }
  }

  /** bound on the |slope| * h that a term of unit size at the walk's start can have in the step that was just tried, or later */
  private steepness(): number {
    const { decay, speeds, terms, fastest } = this.mode.linear;
    const h = this.tried;
    if (fastest * h <= SLOW_LIMIT) return fastest * h;
    const since = this.elapsed - this.walkStart;
    let most = SLOW_LIMIT;
    for (let t = 0; t < terms; t++) {
      const speed = (speeds[t] as number) * h;
      if (speed <= most) continue;
      const own = speed * Math.exp(Math.min(0, (decay[t] as number) * since));
      if (own > most) most = own;
    }
    return most;
  }

  /** keeps the walk that is ending: proven for so long, s */
  private remember(walk: number, proven: number): void {
    if (this.entering === -2) return;
    const { memory, mode, spares } = this;
    let growth = 1;
    if (mode.linear.grows) {
      if (proven === Number.POSITIVE_INFINITY) return;
      for (const d of mode.linear.decay) if (d > 0) growth = Math.max(growth, Math.exp(d * proven));
    }
    const into = memory.numbers;
    const record = memory.at(walk);
    const to = record + memory.sparesFrom;
    for (let g = 0; g < this.guardCount; g++) into[to + g] = (spares[g] as number) / growth;
    into[record + WALK_ENTERING] = this.entering < 0 ? -1 : (this.guards[this.entering] as number);
    into[record + WALK_PROVEN] = proven;
  }

  /** keeps the walk that is ending with a crossing inside the step that was just tried */
  private rememberCrossing(walk: number, earliest: number): void {
    const h = this.tried;
    const { memory, suspects, suspectCount, watched, guards } = this;
    // half way to the next guard that leaves in this step: up to there the others are inside, by their slope
    let until = h;
    for (let k = 0; k < suspectCount; k++) {
      if (guards[suspects[k] as number] !== this.crossedGuard) until = Math.min(until, (earliest + (this.crossings[k] as number)) / 2);
    }
    for (let k = 0; k < suspectCount; k++) {
      const w = suspects[k] as number;
      if (guards[w] === this.crossedGuard) continue;
      const at = w * WATCHED_STRIDE;
      const steep = Math.abs((watched[at + AFTER] as number) - (watched[at + BEFORE] as number)) - 4 * (watched[at + BEND] as number) * h * h;
      const spare = (((this.crossings[k] as number) - until) * steep) / h - 2 * (watched[at + RANGE] as number);
      watched[at + SPARE] = Math.min(watched[at + SPARE] as number, spare);
    }
    this.foldSpares();
    const from = this.elapsed - this.walkStart;
    const into = memory.numbers;
    const record = memory.at(walk);
    into[record + WALK_GUARD] = this.crossedGuard;
    into[record + WALK_SIDE] = this.crossedSide;
    into[record + WALK_ALONE_FROM] = from;
    into[record + WALK_CROSSING] = from + earliest;
    into[record + WALK_FACTORED] = 0;
    this.remember(walk, from + until);
  }

  /** The certificate for a step: false where some guard may leave its window and come back. */
  private certify(): boolean {
    const square = this.tried * this.tried;
    const { keeping } = this;
    const { watched, watchedCount, suspects } = this;
    let certain = true;
    let suspectCount = 0;
    let reserve = MOST_RESERVE;
    for (let w = 0, at = 0; w < watchedCount; w++, at += WATCHED_STRIDE) {
      const before = watched[at + BEFORE] as number;
      const after = watched[at + AFTER] as number;
      const lower = watched[at + LOWER] as number;
      const upper = watched[at + UPPER] as number;
      const slack = watched[at + SLACK] as number;
      const stray = (watched[at + BEND] as number) * square;
      const fast = watched[at + RANGE] as number;
      const d = after - before;
      const least = d < 0 ? after : before;
      const most = d < 0 ? before : after;
      const perStray = 1 / stray;
      const bySlope = 0.25 * d * perStray;
      const room = Math.min(least - lower, upper - most) - fast;
      const own = Math.max(room * perStray, bySlope * bySlope);
      if (own < reserve) reserve = own;
      // whatever the slope, y strays no further than this below its least and above its most
      if (room >= stray) {
        watched[at + SPARE] = room - stray;
        continue;
      }
      // a guard that starts on its bound (within rounding) may start a hair outside, as long as it moves in
      const low = d >= 0 && before <= lower + slack ? lower - slack : lower;
      const high = d <= 0 && before >= upper - slack ? upper + slack : upper;
      const steep = Math.abs(d) - 4 * stray;
      if (steep >= 0) {
        if (least - fast >= low && most + fast <= high) {
          if (keeping) {
            watched[at + SPARE] = room;
            if (room <= slack) this.spareEntering(w, Math.min(least - fast - low, high - most - fast));
          }
          continue;
        }
        if (after < lower || after > upper) {
          suspects[suspectCount++] = w;
          if (keeping) {
            const inside = Math.min(before - lower, upper - before);
            if (inside > slack) watched[at + SPARE] = Math.min(inside, steep / this.steepness());
            else this.spareEntering(w, inside + slack);
          }
          if (fast <= slack) continue;
        }
      } else {
        const middle = 0.5 * (before + after);
        const bulge = stray * (1 + bySlope * bySlope) + fast;
        if (middle - bulge >= low && middle + bulge <= high) {
          watched[at + SPARE] = Math.min(middle - bulge - low, high - middle - bulge) + (low < lower || high > upper ? slack : 0);
          continue;
        }
        if (after < lower || after > upper) suspects[suspectCount++] = w;
      }
      certain = false;
    }
    this.suspectCount = suspectCount;
    this.reserve = reserve;
    return certain;
  }

  /** earliest crossing among the suspects within the step h that was just tried; leaves the coordinates there in zNext */
  private firstCrossing(level: number, h: number): number {
    const { watched, suspects, suspectCount } = this;
    let earliest = Number.POSITIVE_INFINITY;
    let last = 0;
    for (let k = 0; k < suspectCount; k++) {
      const w = suspects[k] as number;
      const lower = watched[w * WATCHED_STRIDE + LOWER] as number;
      const side: 0 | 1 = (watched[w * WATCHED_STRIDE + AFTER] as number) < lower ? 0 : 1;
      const bound = side === 0 ? lower : (watched[w * WATCHED_STRIDE + UPPER] as number);
      const at = this.crossing(w, bound, side === 0 ? 1 : -1, level, h);
      this.crossings[k] = at;
      if (at >= earliest) continue;
      earliest = at;
      last = k;
      this.crossedGuard = this.guards[w] as number;
      this.crossedSide = side;
    }
    if (last < suspectCount - 1) this.moveBy(earliest, this.z);
    return earliest;
  }

  /** Time (0, span] after the present coordinates at which a guard that is monotone there passes the bound, `inside` being 1 where the
   * window is above it; leaves the coordinates there in zNext. */
  private crossing(w: number, bound: number, inside: 1 | -1, level: number, span: number): number {
    const { watched, z } = this;
    const { kernels, coordinates, decay, rotation, factors, outputRows } = this.mode.linear;
    const record = w * WATCHED_STRIDE;
    let f0 = ((watched[record + BEFORE] as number) - bound) * inside;
    if (f0 <= 0) return 0;
    let f1 = ((watched[record + AFTER] as number) - bound) * inside;
    const offset = (watched[record + REST] as number) - bound;
    const enough = ROOT_SHARE * (watched[record + SLACK] as number);
    // first guess: the quintic through value, slope and curvature at both ends; then Newton, kept inside the bracket
    kernels.takeApart(parts, slopes, z, decay, rotation, outputRows, this.rows[w] as number);
    const once = inside * span;
    const twice = once * span;
    ends[0] = f0;
    ends[1] = f1;
    ends[2] = (slopes[0] as number) * once;
    ends[4] = (slopes[1] as number) * twice;
    kernels.bendAfter(slopes, parts, factors, level * coordinates);
    ends[3] = (slopes[0] as number) * once;
    ends[5] = (slopes[1] as number) * twice;
    let at = span * quinticRoot();
    let lo = 0;
    let hi = span;
    // where the factors in `moved` belong
    let probed = Number.POSITIVE_INFINITY;
    const near = NUDGE * span;
    for (let k = 0; k < 60; k++) {
      if (!(at > lo && at < hi)) at = k < 6 ? lo + ((hi - lo) * f0) / (f0 - f1) : (lo + hi) / 2;
      if (Math.abs(at - probed) < near) kernels.nudge(slopes, moved, parts, decay, rotation, at - probed);
      else kernels.probe(slopes, moved, parts, decay, rotation, at);
      probed = at;
      const f = ((slopes[0] as number) + offset) * inside;
      if (Math.abs(f) <= enough) {
        kernels.move(this.zNext, z, moved, 0);
        return at;
      }
      if (f > 0) {
        lo = at;
        f0 = f;
      } else {
        hi = at;
        f1 = f;
      }
      if (hi - lo <= EVENT_TIME) break;
      at = k < 12 ? at - f / ((slopes[1] as number) * inside) : (lo + hi) / 2;
    }
    this.moveBy(hi, z);
    return hi;
  }
}
