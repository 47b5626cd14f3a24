/**
 * The guards on the watch during a walk, and the certificate that none of them has left its window and come back inside a step.
 *
 * For one guard over a step h, with values y0 and y1 at its ends and a bound M on |y''|: y stays above the parabola through y0 and y1 with
 * curvature M. With d = y1 - y0 and s = M h^2 / 8 its least value is min(y0, y1) where |d| >= 4 s, else (y0 + y1)/2 - s - d^2/(16 s);
 * likewise above. Terms too fast for that at this h are taken with their whole range. Where |d| >= 4 s, y is also monotone, with a slope of
 * at least (|d| - 4 s)/h.
 *
 * What a guard has to spare is how far its output may differ from what it was, all along the walk, without anything changing but the moment
 * of the crossing (WalkMemory says what that is good for).
 */
import { numbers } from '../numbers.ts';
import { AFTER, BEFORE, BEND, LOWER, RANGE, SLACK, SPARE, UPPER, WATCHED_STRIDE } from './kernels.ts';
import { LEVELS, SLOW_LIMIT } from './linear-mode.ts';
import type { Mode } from './mode.ts';

/** reserve of a step that nothing bounds: more than the ladder is long */
export const MOST_RESERVE = 1e9;

/** scratch: the side on which a guard is outside */
const outside = new Float64Array(1);

export class GuardWatch {
  /** how many of the mode's windows there are: set by the caller before `begin` */
  guardCount = 0;
  /** the guards on the watch: a record, an output's row and a guard's number each. Their bounds are valid from when they were taken on,
   * since what decays only gets smaller */
  readonly records: Float64Array;
  readonly rows: Int32Array;
  readonly guards: Int32Array;
  count = 0;
  /** after `begin` returned false: the guard that is outside, and 0 for below its lower bound, 1 for above its upper */
  outsideGuard = -1;
  outsideSide: 0 | 1 = 0;
  /** of the step last tried: guards (by their place on the watch) that certainly leave, once; square of the factor by which the step
   * could have been longer, over all guards */
  readonly suspects: Int32Array;
  suspectCount = 0;
  reserve = 0;
  /** what each guard has to spare since the walk began, V or A: kept only while `sparing` */
  readonly spares: Float64Array;
  sparing = false;
  /** guard on the watch that began the walk on its bound and moved in: -1 for none. Its slope at the start is part of what it has to spare */
  entering = -1;
  /** s since the walk began */
  since = 0;
  private mode!: Mode;
  /** of each level's step, its length squared */
  private readonly squares: Float64Array;
  private tried = 0;

  /** the ladder's shortest step, s; at most how many guards the circuit's modes have */
  constructor(shortest: number, mostGuards: number) {
    this.squares = Float64Array.from({ length: LEVELS }, (_, level) => (shortest * 2 ** level) ** 2);
    this.records = numbers(mostGuards * WATCHED_STRIDE);
    this.rows = new Int32Array(mostGuards);
    this.guards = new Int32Array(mostGuards);
    this.suspects = new Int32Array(mostGuards);
    this.spares = numbers(mostGuards);
  }

  /** Takes stock of the guards: their values, and which of them could leave their window at all, however long the walk. False where one is
   * outside by more than its slack. */
  begin(mode: Mode, z: Float64Array, level: number): boolean {
    const { linear, windows } = mode;
    this.mode = mode;
    const count = linear.kernels.begin(
      z,
      linear.eighths,
      linear.growths,
      linear.grows ? level * linear.terms : 0,
      this.squares,
      level,
      linear.outputRows,
      windows.records,
      windows.rows,
      this.guardCount,
      linear.grows,
      this.records,
      this.rows,
      this.guards,
      outside,
      this.spares,
    );
    if (count < 0) {
      this.outsideGuard = ~count;
      this.outsideSide = outside[0] === 0 ? 0 : 1;
      return false;
    }
    this.count = count;
    this.since = 0;
    this.entering = -1;
    return true;
  }

  /** bounds of every guard at this moment, for steps of this level */
  takeBounds(z: Float64Array, level: number): void {
    const { kernels, eighths, growths, grows, terms, outputRows } = this.mode.linear;
    kernels.bound(z, eighths, growths, grows ? level * terms : 0, this.squares, level, outputRows, this.records, this.rows, this.count);
  }

  /** The certificate for the step h whose ends are in the records: false where some guard may leave its window and come back. */
  certify(h: number): boolean {
    const { records, count, suspects, sparing } = this;
    const square = h * h;
    this.tried = h;
    if (this.since === 0) this.entering = -1;
    let certain = true;
    let suspectCount = 0;
    let reserve = MOST_RESERVE;
    for (let w = 0, at = 0; w < count; w++, at += WATCHED_STRIDE) {
      const before = records[at + BEFORE] as number;
      const after = records[at + AFTER] as number;
      const lower = records[at + LOWER] as number;
      const upper = records[at + UPPER] as number;
      const slack = records[at + SLACK] as number;
      const stray = (records[at + BEND] as number) * square;
      const fast = records[at + RANGE] as number;
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
        records[at + SPARE] = room - stray;
        continue;
      }
      // a guard that starts on its bound (within rounding) may start a hair outside, as long as it moves in
      const low = d >= 0 && before <= lower + slack ? lower - slack : lower;
      const high = d <= 0 && before >= upper - slack ? upper + slack : upper;
      if (Math.abs(d) >= 4 * stray) {
        if (least - fast >= low && most + fast <= high) {
          if (room > slack) records[at + SPARE] = room;
          else if (sparing) this.spareOnBound(w, Math.min(least - fast - low, high - most - fast));
          continue;
        }
        if (after < lower || after > upper) {
          suspects[suspectCount++] = w;
          if (sparing) this.spareLeaving(w);
          if (fast <= slack) continue;
        }
      } else {
        const middle = 0.5 * (before + after);
        const bulge = stray * (1 + bySlope * bySlope) + fast;
        if (middle - bulge >= low && middle + bulge <= high) {
          records[at + SPARE] = Math.min(middle - bulge - low, high - middle - bulge) + (low < lower || high > upper ? slack : 0);
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

  /** takes the step that was just certified: its end is the next one's beginning */
  accept(): void {
    const { records, count, spares, guards, sparing } = this;
    for (let w = 0, at = 0; w < count; w++, at += WATCHED_STRIDE) {
      records[at + BEFORE] = records[at + AFTER] as number;
      if (!sparing) continue;
      const g = guards[w] as number;
      const spare = records[at + SPARE] as number;
      if (spare < (spares[g] as number)) spares[g] = spare;
    }
    this.since += this.tried;
  }

  /** Of the step that was just certified another guard is crossed first, `ahead` s before this one leaves its window: by its slope that is
   * so much to spare. */
  spareAhead(w: number, ahead: number): void {
    const at = w * WATCHED_STRIDE;
    const spare = (ahead * this.steep(at)) / this.tried - 2 * (this.records[at + RANGE] as number);
    if (spare < (this.records[at + SPARE] as number)) this.records[at + SPARE] = spare;
  }

  /** a guard that begins a step on its bound and stays inside its window to the step's end: as it is, it has `left` and another slack */
  private spareOnBound(w: number, left: number): void {
    const { records } = this;
    const at = w * WATCHED_STRIDE;
    const after = records[at + AFTER] as number;
    const rises = after > (records[at + BEFORE] as number);
    const toFar = rises ? (records[at + UPPER] as number) - after : after - (records[at + LOWER] as number);
    records[at + SPARE] = Math.max(left + (records[at + SLACK] as number), this.entered(w) ? Math.min(this.slopeSpare(at), toFar) : 0);
  }

  /** a guard that leaves its window in a step, once */
  private spareLeaving(w: number): void {
    const { records } = this;
    const at = w * WATCHED_STRIDE;
    const before = records[at + BEFORE] as number;
    const inside = Math.min(before - (records[at + LOWER] as number), (records[at + UPPER] as number) - before);
    const slack = records[at + SLACK] as number;
    if (inside > slack || !this.entered(w))
      records[at + SPARE] = Math.min(inside > slack ? inside : inside + 2 * slack, this.slopeSpare(at));
    else records[at + SPARE] = this.slopeSpare(at);
  }

  /** Whether a guard that is on its bound enters: begins the walk there and moves in. It does not come back while its slope holds. One at most
   * is taken as that; others have their slack. */
  private entered(w: number): boolean {
    if (this.since > 0 || (this.records[w * WATCHED_STRIDE + RANGE] as number) > 0) return false;
    if (this.entering !== -1 && this.entering !== w) return false;
    this.entering = w;
    return true;
  }

  /** how far |d| is above what monotony needs */
  private steep(at: number): number {
    const { records, tried } = this;
    return (
      Math.abs((records[at + AFTER] as number) - (records[at + BEFORE] as number)) - 4 * (records[at + BEND] as number) * tried * tried
    );
  }

  /** what a monotone guard has to spare of its slope: over what a difference of unit size at the walk's start can have of one from here on */
  private slopeSpare(at: number): number {
    const { tried } = this;
    const { decay, speeds, terms, fastest } = this.mode.linear;
    let most = fastest * tried;
    if (most > SLOW_LIMIT) {
      most = SLOW_LIMIT;
      for (let t = 0; t < terms; t++) {
        const speed = (speeds[t] as number) * tried;
        if (speed <= most) continue;
        // by now the fast ones are gone
        most = Math.max(most, speed * Math.exp(Math.min(0, (decay[t] as number) * this.since)));
      }
    }
    return this.steep(at) / most;
  }
}
