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
import { EVENT_TIME, ROOT_SHARE } from '../tolerances.ts';
import { LEVELS, type Mode, type Passage } from './mode.ts';

const CLEAR = 0;
const CROSSING = 1;
const DOUBTFUL = 2;

export type WalkOutcome = 'reached' | 'crossed' | 'out-of-steps';

/** most guards and coordinates a mode can have: twelve groups with every optional part stay well below */
const MOST_GUARDS = 128;
const MOST_COORDINATES = 160;

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
  private z = new Float64Array(MOST_COORDINATES);
  private zNext = new Float64Array(MOST_COORDINATES);
  private readonly zStart = new Float64Array(MOST_COORDINATES);
  private readonly size = new Float64Array(MOST_COORDINATES);
  /** per guard: bound on |y''|/8 from the slow terms, and the whole range of the fast ones; valid from when they were taken on, since
   * what decays only gets smaller */
  private readonly bend = new Float64Array(MOST_GUARDS);
  private readonly range = new Float64Array(MOST_GUARDS);
  private readonly y0 = new Float64Array(MOST_GUARDS);
  private readonly y1 = new Float64Array(MOST_GUARDS);
  private readonly watched = new Int32Array(MOST_GUARDS);
  private watchedCount = 0;
  private readonly suspects = new Int32Array(MOST_GUARDS);
  private level = 6;
  private slope = 0;
  private curvature = 0;
  private firstStep = true;
  private growing = false;
  private readonly shortest: number;

  constructor(shortest: number) {
    this.shortest = shortest;
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
  }

  /** goes over to a neighbouring mode at this moment: the state is the same, its coordinates are the new mode's */
  pass(passage: Passage): void {
    const { to, matrix } = passage;
    const { z, zNext, zStart } = this;
    const n = to.linear.states;
    for (let r = 0, at = 0; r < n; r++) {
      let sum = 0;
      for (let c = 0; c < n + 2; c++, at++) sum += (matrix[at] as number) * (z[c] as number);
      sum += matrix[at++] as number;
      zNext[r] = sum;
      zStart[r] = sum;
    }
    zNext[n] = z[n] as number;
    zNext[n + 1] = z[n + 1] as number;
    zStart[n] = z[n] as number;
    zStart[n + 1] = z[n + 1] as number;
    this.takeNext();
    this.start(to);
  }

  private start(mode: Mode): void {
    this.mode = mode;
    this.elapsed = 0;
    this.level = mode.startLevel;
    this.firstStep = true;
    this.growing = mode.linear.grows;
  }

  /** sizes of the terms now */
  private measure(): void {
    const { linear } = this.mode;
    const { reals } = linear.modal;
    const { z, size } = this;
    for (let t = 0; t < reals; t++) size[t] = Math.abs(z[t] as number);
    for (let t = reals, k = reals; t < linear.terms; t++, k += 2) {
      const re = z[k] as number;
      const im = z[k + 1] as number;
      size[t] = Math.sqrt(re * re + im * im);
    }
  }

  /** takes the bounds of one guard afresh: terms that are slow at this level count by their curvature, the others by their range */
  private takeBounds(g: number, output: number, level: number): void {
    const { linear } = this.mode;
    const { outputRows, outputStride, terms, bends, ranges } = linear;
    const { reals } = linear.modal;
    const { size } = this;
    let bend = 0;
    let range = 0;
    let at = output * outputStride;
    let b = level * terms;
    for (let t = 0; t < reals; t++, at++, b++) {
      const share = Math.abs(outputRows[at] as number) * (size[t] as number);
      bend += share * (bends[b] as number);
      range += share * (ranges[b] as number);
    }
    for (let t = reals; t < terms; t++, at += 3, b++) {
      const share = (outputRows[at + 2] as number) * (size[t] as number);
      bend += share * (bends[b] as number);
      range += share * (ranges[b] as number);
    }
    this.bend[g] = bend;
    this.range[g] = range;
  }

  /** value of an output now */
  value(output: number): number {
    return this.valueOf(this.z, output);
  }

  private valueOf(z: Float64Array, output: number): number {
    const { linear } = this.mode;
    const { outputRows, outputStride, terms } = linear;
    const { reals } = linear.modal;
    let sum = this.mode.restOutput[output] as number;
    let at = output * outputStride;
    for (let k = 0; k < reals; k++, at++) sum += (outputRows[at] as number) * (z[k] as number);
    for (let t = reals, k = reals; t < terms; t++, k += 2, at += 3) {
      sum += (outputRows[at] as number) * (z[k] as number) + (outputRows[at + 1] as number) * (z[k + 1] as number);
    }
    return sum;
  }

  /** how far an output can be moved by terms of these sizes */
  private reach(output: number, sizes: Float64Array): number {
    const { linear } = this.mode;
    const { outputRows, outputStride, terms } = linear;
    const { reals } = linear.modal;
    let sum = 0;
    let at = output * outputStride;
    for (let t = 0; t < reals; t++, at++) sum += Math.abs(outputRows[at] as number) * (sizes[t] as number);
    for (let t = reals; t < terms; t++, at += 3) sum += (outputRows[at + 2] as number) * (sizes[t] as number);
    return sum;
  }

  /** first and second derivative of an output at the coordinates, into `slope` and `curvature` */
  private differentiate(z: Float64Array, output: number): void {
    const { linear } = this.mode;
    const { outputRows, outputStride, decay, rotation, terms } = linear;
    const { reals } = linear.modal;
    let at = output * outputStride;
    let first = 0;
    let second = 0;
    for (let k = 0; k < reals; k++, at++) {
      const d = decay[k] as number;
      const share = (outputRows[at] as number) * (z[k] as number) * d;
      first += share;
      second += share * d;
    }
    for (let t = reals, k = reals; t < terms; t++, k += 2, at += 3) {
      const d = decay[t] as number;
      const q = rotation[t] as number;
      const a = outputRows[at] as number;
      const b = outputRows[at + 1] as number;
      const re = d * (z[k] as number) - q * (z[k + 1] as number);
      const im = q * (z[k] as number) + d * (z[k + 1] as number);
      first += a * re + b * im;
      second += a * (d * re - q * im) + b * (q * re + d * im);
    }
    this.slope = first;
    this.curvature = second;
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

  /**
   * Takes stock of the guards at this moment: their values, and which of them could leave their window at all before `end` (time since
   * the visit's start). Returns the first guard that is outside by more than its slack (crossedGuard, crossedSide), or -1.
   */
  begin(): number {
    const { restOutput, windows } = this.mode;
    const { z, size, y0, watched, guardCount, growing } = this;
    const { output: outputs, lower: lowers, upper: uppers, slack: slacks } = windows;
    let count = 0;
    this.measure();
    for (let g = 0; g < guardCount; g++) {
      const output = outputs[g] as number;
      const rest = restOutput[output] as number;
      const lower = lowers[g] as number;
      const upper = uppers[g] as number;
      const y = this.valueOf(z, output);
      const slack = slacks[g] as number;
      if (y < lower - slack || y > upper + slack) {
        this.crossedGuard = g;
        this.crossedSide = y < lower ? 0 : 1;
        return g;
      }
      const reach = this.reach(output, size);
      if (!growing && rest - reach > lower && rest + reach < upper) continue;
      watched[count++] = g;
      y0[g] = y;
      this.takeBounds(g, output, this.level);
    }
    this.watchedCount = count;
    return -1;
  }

  /** moves coordinates by a time that is not on the ladder */
  private advance(into: Float64Array, from: Float64Array, by: number): void {
    const { linear } = this.mode;
    const { reals } = linear.modal;
    const { decay, rotation, terms } = linear;
    for (let t = 0; t < reals; t++) into[t] = (from[t] as number) * Math.exp((decay[t] as number) * by);
    for (let t = reals, k = reals; t < terms; t++, k += 2) {
      const d = decay[t] as number;
      const angle = (rotation[t] as number) * by;
      const size = d === 0 ? 1 : Math.exp(d * by);
      const re = size * Math.cos(angle);
      const im = size * Math.sin(angle);
      const a = from[k] as number;
      const b = from[k + 1] as number;
      into[k] = re * a - im * b;
      into[k + 1] = re * b + im * a;
    }
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
    this.advance(this.zNext, this.zStart, elapsed);
    this.takeNext();
  }

  /** time (0, span] after the present coordinates at which a guard that is monotone there passes the bound; leaves the coordinates there in zNext */
  private crossing(g: number, bound: number, side: 0 | 1, span: number): number {
    const { output: outputs, slack } = this.mode.windows;
    const output = outputs[g] as number;
    const inside = side === 0 ? 1 : -1;
    let f0 = ((this.y0[g] as number) - bound) * inside;
    if (f0 <= 0) return 0;
    let f1 = ((this.y1[g] as number) - bound) * inside;
    let lo = 0;
    let hi = span;
    const enough = ROOT_SHARE * (slack[g] as number);
    // first guess: the quintic through value, slope and curvature at both ends; then Newton, kept inside the bracket
    this.differentiate(this.z, output);
    const slope0 = this.slope * inside * span;
    const bend0 = this.curvature * inside * span * span;
    this.differentiate(this.zNext, output);
    let at = span * quinticRoot(f0, f1, slope0, this.slope * inside * span, bend0, this.curvature * inside * span * span);
    for (let k = 0; k < 60; k++) {
      if (!(at > lo && at < hi)) at = k < 6 ? lo + ((hi - lo) * f0) / (f0 - f1) : (lo + hi) / 2;
      this.advance(this.zNext, this.z, at);
      const f = (this.valueOf(this.zNext, output) - bound) * inside;
      if (Math.abs(f) <= enough) return at;
      if (f > 0) {
        lo = at;
        f0 = f;
      } else {
        hi = at;
        f1 = f;
      }
      if (hi - lo <= EVENT_TIME) break;
      this.differentiate(this.zNext, output);
      at = k < 12 ? at - f / (this.slope * inside) : (lo + hi) / 2;
    }
    this.advance(this.zNext, this.z, hi);
    return hi;
  }

  /**
   * Walks on until `end` (time since the visit's start) or until a guard is crossed; `begin` has taken stock. `stepBudget` bounds the
   * trial steps. With `force` the first step is one shortest step whatever the guards say: how the caller breaks a standstill.
   */
  walk(end: number, stepBudget: number, force = false): WalkOutcome {
    const { linear, restOutput, windows } = this.mode;
    const { coordinates, terms, factors, outputRows, outputStride } = linear;
    const { output: outputs, lower: lowers, upper: uppers, slack: slacks } = windows;
    const { reals } = linear.modal;
    const { y0, y1, watched, suspects, watchedCount, bend, range } = this;
    let forced = force;
    let level = forced ? 0 : this.level;
    /** level at which the guards' bounds were last taken, and whether that was at the present moment */
    let boundsLevel = this.level;
    let boundsFresh = true;
    for (let budget = stepBudget; budget > 0; budget--) {
      const remaining = end - this.elapsed;
      if (watchedCount === 0 || remaining <= 0) {
        this.level = level;
        if (remaining > 0) this.settleAt(end);
        return 'reached';
      }
      this.steps++;
      const { z, zNext } = this;
      const h = this.shortest * (1 << level);
      const square = h * h;
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
      if (this.growing) {
        // what grows outgrows its bounds
        this.measure();
        for (let w = 0; w < watchedCount; w++) this.takeBounds(watched[w] as number, outputs[watched[w] as number] as number, level);
        boundsFresh = true;
        boundsLevel = level;
      }
      // doubtful: might leave and return within the step; suspect: certainly leaves, once
      let doubtful = false;
      let suspectCount = 0;
      // square of the factor by which the step could have been longer, over all guards
      let reserve = 1e9;
      for (let w = 0; w < watchedCount; w++) {
        const g = watched[w] as number;
        const output = outputs[g] as number;
        let y = restOutput[output] as number;
        let at = output * outputStride;
        for (let k = 0; k < reals; k++, at++) y += (outputRows[at] as number) * (zNext[k] as number);
        for (let t = reals, k = reals; t < terms; t++, k += 2, at += 3) {
          y += (outputRows[at] as number) * (zNext[k] as number) + (outputRows[at + 1] as number) * (zNext[k + 1] as number);
        }
        y1[g] = y;
        const before = y0[g] as number;
        const lower = lowers[g] as number;
        const upper = uppers[g] as number;
        let doubt = 0;
        for (;;) {
          const stray = (bend[g] as number) * square;
          const fast = range[g] as number;
          doubt = this.doubtOf(before, y, lower, upper, slacks[g] as number, stray, fast);
          const d = y - before;
          const bySlope = d / (4 * stray);
          const room = Math.min(Math.min(before, y) - lower, upper - Math.max(before, y)) - fast;
          const own = Math.max(room / stray, bySlope * bySlope);
          if (doubt !== DOUBTFUL || (boundsFresh && boundsLevel <= level)) {
            if (own < reserve) reserve = own;
            break;
          }
          // the bounds may only be out of date
          if (!boundsFresh) {
            this.measure();
            boundsFresh = true;
          }
          boundsLevel = level;
          for (let v = 0; v < watchedCount; v++) {
            const other = watched[v] as number;
            this.takeBounds(other, outputs[other] as number, level);
          }
        }
        if (doubt === CLEAR) continue;
        if (y < lower || y > upper) suspects[suspectCount++] = g;
        if (doubt === DOUBTFUL) doubtful = true;
      }
      if (forced) {
        suspectCount = 0;
        doubtful = false;
        forced = false;
        this.uncertified++;
      }
      if (doubtful && level > 0) {
        level--;
        while (level > 0 && reserve < 0.25) {
          reserve *= 4;
          level--;
        }
        continue;
      }
      if (doubtful) this.uncertified++;
      if (suspectCount > 0) {
        this.level = level;
        const earliest = this.firstCrossing(suspectCount, h);
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
        this.settleAt(end);
        return 'reached';
      }
      this.elapsed += h;
      this.takeNext();
      boundsFresh = false;
      for (let w = 0; w < watchedCount; w++) {
        const g = watched[w] as number;
        y0[g] = y1[g] as number;
      }
      if (level < LEVELS - 1) {
        level++;
        while (level < LEVELS - 1 && reserve >= 16) {
          reserve /= 4;
          level++;
        }
      }
    }
    return 'out-of-steps';
  }

  /** the certificate: CLEAR stays inside, CROSSING certainly leaves and only once, DOUBTFUL neither is certain */
  private doubtOf(before: number, y: number, lower: number, upper: number, slack: number, stray: number, fast: number): number {
    const d = y - before;
    // a guard that starts on its bound (within rounding) may start a hair outside, as long as it moves in
    const low = before <= lower + slack && d >= 0 ? lower - slack : lower;
    const high = before >= upper - slack && d <= 0 ? upper + slack : upper;
    const least = Math.min(before, y);
    const most = Math.max(before, y);
    if (Math.abs(d) >= 4 * stray) {
      if (least - fast >= low && most + fast <= high) return CLEAR;
      return (y < lower || y > upper) && fast <= slack ? CROSSING : DOUBTFUL;
    }
    const middle = (before + y) / 2;
    const bulge = stray + (d * d) / (16 * stray) + fast;
    return middle - bulge >= low && middle + bulge <= high ? CLEAR : DOUBTFUL;
  }

  /** earliest crossing among the suspects within the step h that was just tried; leaves the coordinates there in zNext */
  private firstCrossing(suspectCount: number, h: number): number {
    const { lower: lowers, upper: uppers } = this.mode.windows;
    let earliest = Number.POSITIVE_INFINITY;
    let last = 0;
    for (let k = 0; k < suspectCount; k++) {
      const g = this.suspects[k] as number;
      const side: 0 | 1 = (this.y1[g] as number) < (lowers[g] as number) ? 0 : 1;
      if (k > 0) this.advance(this.zNext, this.z, h);
      const at = this.crossing(g, (side === 0 ? lowers[g] : uppers[g]) as number, side, h);
      if (at >= earliest) continue;
      earliest = at;
      last = k;
      this.crossedGuard = g;
      this.crossedSide = side;
    }
    if (last < suspectCount - 1) this.advance(this.zNext, this.z, earliest);
    return earliest;
  }
}

/** where between 0 and 1 the quintic with these values, slopes and curvatures at 0 and 1 passes zero, having fallen from f0 > 0 to f1 */
function quinticRoot(f0: number, f1: number, slope0: number, slope1: number, bend0: number, bend1: number): number {
  const rise = f1 - f0 - slope0 - bend0 / 2;
  const turn = slope1 - slope0 - bend0;
  const bend = bend1 - bend0;
  const c3 = 10 * rise - 4 * turn + bend / 2;
  const c4 = -15 * rise + 7 * turn - bend;
  const c5 = 6 * rise - 3 * turn + bend / 2;
  let lo = 0;
  let hi = 1;
  let u = f0 / (f0 - f1);
  for (let k = 0; k < 8; k++) {
    const value = f0 + u * (slope0 + u * (bend0 / 2 + u * (c3 + u * (c4 + u * c5))));
    if (value > 0) lo = u;
    else hi = u;
    const next = u - value / (slope0 + u * (bend0 + u * (3 * c3 + u * (4 * c4 + u * 5 * c5))));
    const kept = next > lo && next < hi ? next : (lo + hi) / 2;
    if (Math.abs(kept - u) < 1e-9) return kept;
    u = kept;
  }
  return u;
}
