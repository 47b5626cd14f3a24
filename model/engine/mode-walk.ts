/**
 * Walks one mode from a state until a guard's window is left or a given time is reached. Certain, not only likely: a step is taken only
 * when no guard can have left its window and come back inside it, or when it is the ladder's shortest (76 ns).
 *
 * Certificate for one guard over a step h, with values y0 and y1 at its ends and a bound M on |y''|: y stays above the parabola through
 * y0 and y1 with curvature M. With d = y1 - y0 and s = M h^2 / 8 its least value is min(y0, y1) where |d| >= 4 s, else
 * (y0 + y1)/2 - s - d^2/(16 s); likewise above. Terms too fast for that at this h are taken with their whole range. Where |d| >= 4 s, y is
 * also monotone, so a crossing inside the step is the only one, and a bracketed Newton iteration on the closed form finds it.
 */
import { EVENT_TIME } from '../tolerances.ts';
import { LEVELS, type Mode } from './mode.ts';

export type WalkOutcome = 'reached' | 'crossed' | 'out-of-steps';

/** most guards a mode can have */
const MOST_GUARDS = 128;
const MOST_COORDINATES = 160;

export class ModeWalk {
  /** guards to watch: set by the caller before `walk`; the window may change between walks of one visit */
  guardCount = 0;
  readonly output = new Int32Array(MOST_GUARDS);
  readonly lower = new Float64Array(MOST_GUARDS);
  readonly upper = new Float64Array(MOST_GUARDS);
  /** how far outside its window a guard may be before it counts as outside: rounding of the quantity */
  readonly slack = new Float64Array(MOST_GUARDS);
  /** after "crossed": which guard, and 0 for its lower bound, 1 for its upper */
  crossedGuard = -1;
  crossedSide: 0 | 1 = 0;
  /** time since the mode was entered */
  elapsed = 0;
  steps = 0;
  uncertified = 0;

  private mode!: Mode;
  private readonly z = new Float64Array(MOST_COORDINATES);
  private readonly zNext = new Float64Array(MOST_COORDINATES);
  private readonly zStart = new Float64Array(MOST_COORDINATES);
  private readonly size = new Float64Array(MOST_COORDINATES);
  private readonly straySlow = new Float64Array(MOST_COORDINATES);
  private readonly strayFast = new Float64Array(MOST_COORDINATES);
  private readonly y0 = new Float64Array(MOST_GUARDS);
  private readonly y1 = new Float64Array(MOST_GUARDS);
  private readonly watched = new Int32Array(MOST_GUARDS);
  private watchedCount = 0;
  private readonly suspects = new Int32Array(MOST_GUARDS);
  private level = 6;
  private firstStep = true;
  private readonly shortest: number;

  constructor(shortest: number) {
    this.shortest = shortest;
  }

  /** starts a visit: x in the mode's own (mirrored) coordinates, the mains' cosine and sine at this moment */
  enter(mode: Mode, x: Float64Array, cos: number, sin: number): void {
    const { linear } = mode;
    const n = linear.states;
    const { inverse } = linear.modal;
    const { z, zStart, zNext } = this;
    this.mode = mode;
    this.elapsed = 0;
    this.level = mode.startLevel;
    this.firstStep = true;
    for (let k = 0; k < n; k++) {
      zNext[k] =
        (x[k] as number) - (mode.restState[k] as number) - cos * (linear.driveCos[k] as number) - sin * (linear.driveSin[k] as number);
    }
    for (let r = 0; r < n; r++) {
      let sum = 0;
      for (let c = 0; c < n; c++) sum += (inverse[r * n + c] as number) * (zNext[c] as number);
      z[r] = sum;
    }
    z[n] = cos;
    z[n + 1] = sin;
    for (let k = 0; k < n + 2; k++) zStart[k] = z[k] as number;
    this.measure();
  }

  private measure(): void {
    const { linear } = this.mode;
    const { reals } = linear.modal;
    for (let t = 0; t < linear.terms; t++) {
      const k = t < reals ? t : reals + 2 * (t - reals);
      this.size[t] = t < reals ? Math.abs(this.z[k] as number) : Math.hypot(this.z[k] as number, this.z[k + 1] as number);
    }
  }

  /** value of an output now */
  value(output: number): number {
    return this.valueOf(this.z, output);
  }

  private valueOf(z: Float64Array, output: number): number {
    const { linear } = this.mode;
    const { outputRows, coordinates } = linear;
    let sum = this.mode.restOutput[output] as number;
    for (let k = 0, at = output * coordinates; k < coordinates; k++) sum += (outputRows[at + k] as number) * (z[k] as number);
    return sum;
  }

  /** the state now, in the mode's own coordinates */
  leave(x: Float64Array): void {
    const { linear, restState } = this.mode;
    const n = linear.states;
    const { basis } = linear.modal;
    const cos = this.z[n] as number;
    const sin = this.z[n + 1] as number;
    for (let r = 0; r < n; r++) {
      let sum = (restState[r] as number) + cos * (linear.driveCos[r] as number) + sin * (linear.driveSin[r] as number);
      for (let c = 0; c < n; c++) sum += (basis[r * n + c] as number) * (this.z[c] as number);
      x[r] = sum;
    }
  }

  /** coordinates at the visit's start: with `elapsed` they give everything that happened since, in closed form */
  startCoordinates(into: Float64Array): void {
    for (let k = 0; k < this.mode.linear.coordinates; k++) into[k] = this.zStart[k] as number;
  }

  /** first guard that is outside its window by more than its slack, or -1; sets crossedGuard and crossedSide */
  outside(): number {
    for (let g = 0; g < this.guardCount; g++) {
      const y = this.value(this.output[g] as number);
      if (y < (this.lower[g] as number) - (this.slack[g] as number)) {
        this.crossedGuard = g;
        this.crossedSide = 0;
        return g;
      }
      if (y > (this.upper[g] as number) + (this.slack[g] as number)) {
        this.crossedGuard = g;
        this.crossedSide = 1;
        return g;
      }
    }
    return -1;
  }

  /** moves the coordinates from z by a time that is not on the ladder, into `into` */
  private advance(into: Float64Array, from: Float64Array, by: number): void {
    const { linear } = this.mode;
    const { reals } = linear.modal;
    const { decay, rotation, terms } = linear;
    for (let t = 0; t < reals; t++) into[t] = (from[t] as number) * Math.exp((decay[t] as number) * by);
    for (let t = reals; t < terms; t++) {
      const k = reals + 2 * (t - reals);
      const size = Math.exp((decay[t] as number) * by);
      const angle = (rotation[t] as number) * by;
      const re = size * Math.cos(angle);
      const im = size * Math.sin(angle);
      const a = from[k] as number;
      const b = from[k + 1] as number;
      into[k] = re * a - im * b;
      into[k + 1] = re * b + im * a;
    }
  }

  /** ends the walk `by` after the present coordinates */
  private settleAt(by: number): void {
    this.elapsed += by;
    if (by === 0) return;
    // from the visit's start rather than from here: no error adds up over the steps
    this.advance(this.zNext, this.zStart, this.elapsed);
    for (let k = 0; k < this.mode.linear.coordinates; k++) this.z[k] = this.zNext[k] as number;
    this.measure();
  }

  /** time after the present coordinates at which the output passes the bound, known to lie in (0, span]; on the far side, within EVENT_TIME */
  private crossing(output: number, bound: number, side: 0 | 1, span: number, y0: number, y1: number): number {
    const inside = side === 0 ? 1 : -1;
    let lo = 0;
    let hi = span;
    let f0 = (y0 - bound) * inside;
    let f1 = (y1 - bound) * inside;
    if (f0 <= 0) return 0;
    let kept = 0;
    for (let k = 0; k < 80 && hi - lo > EVENT_TIME; k++) {
      // Illinois false position, halved when one end will not move
      let at = lo + ((hi - lo) * f0) / (f0 - f1);
      if (k > 40) at = (lo + hi) / 2;
      if (at - lo < EVENT_TIME / 4) at = lo + EVENT_TIME / 4;
      if (hi - at < EVENT_TIME / 4) at = hi - EVENT_TIME / 4;
      this.advance(this.zNext, this.z, at);
      const f = (this.valueOf(this.zNext, output) - bound) * inside;
      if (f > 0) {
        lo = at;
        f0 = f;
        if (kept === 1) f1 /= 2;
        kept = 1;
      } else {
        hi = at;
        f1 = f;
        if (kept === -1) f0 /= 2;
        kept = -1;
        if (f === 0) break;
      }
    }
    return hi;
  }

  /** picks the guards that could leave their window at all during this visit, and their values now */
  private watch(span: number): void {
    const { linear, restOutput } = this.mode;
    const { terms, outputSizes, decay } = linear;
    this.watchedCount = 0;
    let growing = false;
    for (let t = 0; t < terms; t++) if ((decay[t] as number) * span > 0) growing = true;
    for (let g = 0; g < this.guardCount; g++) {
      const output = this.output[g] as number;
      const rest = restOutput[output] as number;
      let reach = 0;
      for (let t = 0, at = output * terms; t < terms; t++) reach += (outputSizes[at + t] as number) * (this.size[t] as number);
      if (!growing && rest - reach > (this.lower[g] as number) && rest + reach < (this.upper[g] as number)) continue;
      this.watched[this.watchedCount++] = g;
      this.y0[g] = this.value(output);
    }
  }

  /**
   * Walks on until `end` (time since the visit's start) or until a guard is crossed. `stepBudget` bounds the trial steps. With
   * `forceFirst` the first step is one shortest step whatever the guards say: how the caller breaks a standstill.
   */
  walk(end: number, stepBudget: number, forceFirst = false): WalkOutcome {
    const { linear, restOutput } = this.mode;
    const { coordinates, terms, factors, sizes, strayingSlow, strayingFast, fastTerms, outputRows, outputSizes } = linear;
    const { reals } = linear.modal;
    const { z, zNext, size, straySlow, strayFast, y0, y1, watched, suspects } = this;
    this.watch(end - this.elapsed);
    let forced = forceFirst;
    let level = forced ? 0 : this.level;
    for (let budget = stepBudget; budget > 0; budget--) {
      const remaining = end - this.elapsed;
      if (this.watchedCount === 0 || remaining <= 0) {
        this.level = level;
        this.settleAt(Math.max(0, remaining));
        return 'reached';
      }
      this.steps++;
      const h = this.shortest * 2 ** level;
      const f = level * coordinates;
      for (let k = 0; k < reals; k++) zNext[k] = (z[k] as number) * (factors[f + k] as number);
      for (let k = reals; k < coordinates; k += 2) {
        const re = factors[f + k] as number;
        const im = factors[f + k + 1] as number;
        const a = z[k] as number;
        const b = z[k + 1] as number;
        zNext[k] = re * a - im * b;
        zNext[k + 1] = re * b + im * a;
      }
      const s = level * terms;
      const hasFast = (fastTerms[level] as number) > 0;
      for (let t = 0; t < terms; t++) {
        straySlow[t] = (size[t] as number) * (strayingSlow[s + t] as number);
        if (hasFast) strayFast[t] = (size[t] as number) * (strayingFast[s + t] as number);
      }
      // doubtful: might leave and return within the step; crossing: certainly leaves, once
      let doubtful = false;
      let suspectCount = 0;
      for (let w = 0; w < this.watchedCount; w++) {
        const g = watched[w] as number;
        const output = this.output[g] as number;
        let y = restOutput[output] as number;
        for (let k = 0, at = output * coordinates; k < coordinates; k++) y += (outputRows[at + k] as number) * (zNext[k] as number);
        y1[g] = y;
        let stray = 0;
        let fast = 0;
        for (let t = 0, at = output * terms; t < terms; t++) stray += (outputSizes[at + t] as number) * (straySlow[t] as number);
        if (hasFast)
          for (let t = 0, at = output * terms; t < terms; t++) fast += (outputSizes[at + t] as number) * (strayFast[t] as number);
        const before = y0[g] as number;
        const d = y - before;
        const monotone = Math.abs(d) >= 4 * stray;
        const middle = monotone ? 0 : stray + (d * d) / (16 * stray);
        const least = (monotone ? Math.min(before, y) : (before + y) / 2 - middle) - fast;
        const most = (monotone ? Math.max(before, y) : (before + y) / 2 + middle) + fast;
        const slack = this.slack[g] as number;
        const lower = this.lower[g] as number;
        const upper = this.upper[g] as number;
        // a guard that starts on its bound (within rounding) may start a hair outside, as long as it moves in
        const low = before <= lower + slack && d >= 0 ? lower - slack : lower;
        const high = before >= upper - slack && d <= 0 ? upper + slack : upper;
        if (least >= low && most <= high) continue;
        if (y < lower || y > upper) {
          suspects[suspectCount++] = g;
          if (!monotone || fast > slack) doubtful = true;
        } else doubtful = true;
      }
      if (forced) {
        // fall through to taking the step
        suspectCount = 0;
        doubtful = false;
        forced = false;
        this.uncertified++;
      }
      if (doubtful && level > 0) {
        level = level > 2 && suspectCount === 0 ? level - 2 : level - 1;
        continue;
      }
      if (doubtful) this.uncertified++;
      if (suspectCount > 0) {
        let earliest = Number.POSITIVE_INFINITY;
        for (let k = 0; k < suspectCount; k++) {
          const g = suspects[k] as number;
          const side: 0 | 1 = (y1[g] as number) < (this.lower[g] as number) ? 0 : 1;
          const bound = side === 0 ? (this.lower[g] as number) : (this.upper[g] as number);
          const at = this.crossing(this.output[g] as number, bound, side, h, y0[g] as number, y1[g] as number);
          if (at < earliest) {
            earliest = at;
            this.crossedGuard = g;
            this.crossedSide = side;
          }
        }
        this.level = Math.max(0, level - 1);
        if (earliest >= remaining) {
          this.settleAt(remaining);
          return 'reached';
        }
        this.settleAt(earliest);
        return 'crossed';
      }
      if (this.firstStep) {
        this.mode.startLevel = level;
        this.firstStep = false;
      }
      if (h >= remaining) {
        this.level = level;
        this.settleAt(remaining);
        return 'reached';
      }
      this.elapsed += h;
      for (let k = 0; k < coordinates; k++) z[k] = zNext[k] as number;
      for (let t = 0; t < terms; t++) size[t] = (size[t] as number) * (sizes[s + t] as number);
      for (let w = 0; w < this.watchedCount; w++) {
        const g = watched[w] as number;
        y0[g] = y1[g] as number;
      }
      if (level < LEVELS - 1) level++;
    }
    return 'out-of-steps';
  }
}
