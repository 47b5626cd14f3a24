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
import { SLOW_LIMIT, takeStrays } from './linear-mode.ts';
import type { Mode } from './mode.ts';

/** reserve of a step that nothing bounds: more than the ladder is long */
export const MOST_RESERVE = 1e9;

/** exponent below which a fast term has no slope left, however long the step */
const GONE = -40;

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
  /** s after the step's start: when each suspect leaves its window. Filled in by the caller */
  readonly crossings: Float64Array;
  /** what each guard has to spare since the walk began, V or A: kept only while `sparing` */
  readonly spares: Float64Array;
  sparing = false;
  /** guard on the watch that began the walk on its bound and moved in: -1 for none. Its slope at the start is part of what it has to spare */
  entering = -1;
  /** s since the walk began, and length of the step that is tried: set by the caller (a number as an argument would be put on the heap) */
  since = 0;
  tried = 0;
  /** of a walk that ends by a crossing, s after its start: how far it is proven, from when on the crossing is the only one, and the crossing */
  proven = 0;
  aloneFrom = 0;
  crossing = 0;
  private mode!: Mode;
  /** |slope| times the step that a difference of unit size at the walk's start can have in the step that was certified last, or later */
  private steepest = 0;

  constructor(mostGuards: number) {
    this.records = numbers(mostGuards * WATCHED_STRIDE);
    this.rows = new Int32Array(mostGuards);
    this.guards = new Int32Array(mostGuards);
    this.suspects = new Int32Array(mostGuards);
    this.crossings = numbers(mostGuards);
    this.spares = numbers(mostGuards);
  }

  /** Takes stock of the guards: their values, and which of them could leave their window at all, however long the walk. False where one is
   * outside by more than its slack. */
  begin(mode: Mode, z: Float64Array, level: number): boolean {
    const { linear, windows } = mode;
    this.mode = mode;
    takeStrays(linear, level);
    const count = linear.kernels.begin(
      z,
      linear.strays,
      level * linear.terms,
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
    const { linear } = this.mode;
    takeStrays(linear, level);
    linear.kernels.bound(z, linear.strays, level * linear.terms, linear.outputRows, this.records, this.rows, this.count);
  }

  /** The certificate for the step that is tried, whose ends are in the records: false where some guard may leave its window and come back. */
  certify(): boolean {
    const { records, count, suspects, tried } = this;
    const square = tried * tried;
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
          records[at + SPARE] = room;
          continue;
        }
        if (after < lower || after > upper) {
          suspects[suspectCount++] = w;
          if (fast <= slack) continue;
        }
      } else {
        const middle = 0.5 * (before + after);
        const bulge = stray * (1 + bySlope * bySlope) + fast;
        if (middle - bulge >= low && middle + bulge <= high) {
          records[at + SPARE] = Math.min(middle - bulge - lower, upper - middle - bulge);
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
    const { records, count } = this;
    if (this.sparing) {
      if (this.since === 0) this.spareOnBound();
      this.takeSpares();
    }
    for (let w = 0, at = 0; w < count; w++, at += WATCHED_STRIDE) records[at + BEFORE] = records[at + AFTER] as number;
    this.since += this.tried;
  }

  /** what the guards have to spare over the step that was just certified, into `spares` where that is less than so far */
  private takeSpares(): void {
    const { records, count, spares, guards } = this;
    for (let w = 0, at = 0; w < count; w++, at += WATCHED_STRIDE) {
      const g = guards[w] as number;
      const spare = records[at + SPARE] as number;
      if (spare < (spares[g] as number)) spares[g] = spare;
    }
  }

  /** Guards that begin the walk on their bound and move in. Such a one may be a hair outside; and it does not come back while its slope holds.
   * One at most is known by its slope, and must be looked at again by whoever relies on it. */
  private spareOnBound(): void {
    const { records, count } = this;
    for (let w = 0, at = 0; w < count; w++, at += WATCHED_STRIDE) {
      const spare = records[at + SPARE] as number;
      const slack = records[at + SLACK] as number;
      if (spare > slack) continue;
      const plain = spare + 2 * slack;
      records[at + SPARE] = plain;
      if (this.entering !== -1 || (records[at + RANGE] as number) > 0) continue;
      const before = records[at + BEFORE] as number;
      const after = records[at + AFTER] as number;
      const toFar = after > before ? (records[at + UPPER] as number) - after : after - (records[at + LOWER] as number);
      this.takeSteepest();
      const bySlope = Math.min(this.steep(at) / this.steepest, toFar);
      if (bySlope <= plain) continue;
      this.entering = w;
      records[at + SPARE] = bySlope;
    }
  }

  /**
   * Ends the walk by a crossing inside the step that was just certified: the suspects' are in `crossings`, that of the `first`th is the first.
   * All of them are monotone in it. The one that is crossed must come from inside and stay monotone; the others are inside up to half way
   * between, which their slope tells, and so far the walk is proven.
   */
  cross(first: number): void {
    const { records, crossings, suspects, suspectCount, since, tried } = this;
    if (since === 0) this.spareOnBound();
    const at = crossings[first] as number;
    let until = tried;
    for (let k = 0; k < suspectCount; k++) if (k !== first) until = Math.min(until, (at + (crossings[k] as number)) / 2);
    this.takeSteepest();
    for (let k = 0; k < suspectCount; k++) {
      const w = suspects[k] as number;
      const record = w * WATCHED_STRIDE;
      const before = records[record + BEFORE] as number;
      const fast = records[record + RANGE] as number;
      const slack = records[record + SLACK] as number;
      const steep = this.steep(record);
      const inside = Math.min(before - (records[record + LOWER] as number), (records[record + UPPER] as number) - before);
      let spare = steep / this.steepest;
      if (inside > slack) spare = Math.min(spare, inside);
      else if (since > 0 || fast > 0 || this.entering !== -1) spare = Math.min(spare, inside + 2 * slack);
      else this.entering = w;
      if (k !== first) spare = Math.min(spare, (((crossings[k] as number) - until) * steep) / tried - 2 * fast);
      records[record + SPARE] = spare;
    }
    this.takeSpares();
    this.proven = since + until;
    this.aloneFrom = since;
    this.crossing = since + at;
  }

  /** how far a guard's |d| is above what monotony needs */
  private steep(record: number): number {
    const { records, tried } = this;
    return (
      Math.abs((records[record + AFTER] as number) - (records[record + BEFORE] as number)) -
      4 * (records[record + BEND] as number) * tried * tried
    );
  }

  private takeSteepest(): void {
    const { decay, speeds, terms, fastest } = this.mode.linear;
    const { tried, since } = this;
    let most = fastest * tried;
    if (most > SLOW_LIMIT) {
      most = SLOW_LIMIT;
      for (let t = 0; t < terms; t++) {
        const speed = (speeds[t] as number) * tried;
        if (speed <= most) continue;
        // by now the fast ones are gone
        const faded = (decay[t] as number) * since;
        if (faded > GONE) most = Math.max(most, faded < 0 ? speed * Math.exp(faded) : speed);
      }
    }
    this.steepest = most;
  }
}
