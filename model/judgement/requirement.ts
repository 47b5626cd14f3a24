/**
 * The inverse question: with which latching and holding currents would these lamps run? Along rays of constant IH/IL the largest
 * currents are bracketed with which the pairing is suitable at every corner. Bracketing finds one edge of each ray; whether smaller currents
 * do as well is only sampled, and said point by point.
 */
import type { Outcome } from '../failures.ts';
import type { Pairing } from '../pairing.ts';
import { checkOptions, checkPairing } from '../pairing-check.ts';
import type { CornerInputs, CornerName, JudgeOptions, Requirement, RequirementPoint } from '../verdict.ts';
import { cornersOf } from './corners.ts';
import { failsOnTheWayUp } from './dial-trial.ts';
import { EffortTally } from './effort.ts';
import {
  DESCENT_RATIO,
  LADDER_RATIO,
  LEAST_LATCHING,
  MOST_LATCHING,
  PROBE_BELOW,
  REQUIREMENT_RATIO,
  REQUIREMENT_RATIOS,
} from './judgement-figures.ts';
import { checkJudgeExtras } from './options-check.ts';
import { type JudgedCorner, judgeCorner, overCorners } from './over-corners.ts';
import { stopCause } from './stop-cause.ts';

function withCurrents(pairing: Pairing, latching: number, holding: number): Pairing {
  const both = (value: number) => ({ positive: value, negative: value });
  return {
    ...pairing,
    dimmer: {
      ...pairing.dimmer,
      latchingCurrent: both(latching),
      holdingCurrent: both(holding),
      typicalLatchingCurrent: null,
      typicalHoldingCurrent: null,
    },
  };
}

/** One ray of constant IH/IL; positions on it are latching currents. */
class Ray {
  readonly ratio: number;
  private readonly pairing: Pairing;
  private readonly options: JudgeOptions;
  private readonly effort: EffortTally;
  /** the smallest current above the edge that is known to fail, and the corner at which it does */
  failing: { readonly at: number; readonly corner: CornerName } | null = null;

  constructor(pairing: Pairing, ratio: number, options: JudgeOptions, effort: EffortTally) {
    this.pairing = pairing;
    this.ratio = ratio;
    this.options = options;
    this.effort = effort;
  }

  private at(latching: number): Pairing {
    return withCurrents(this.pairing, latching, latching * this.ratio);
  }

  private corner(name: CornerName, latching: number): CornerInputs {
    const corner = cornersOf(this.at(latching), this.options).find((c) => c.name === name);
    if (corner === undefined) throw new Error(`no corner ${name}`);
    return corner;
  }

  /** whether the way up at one corner is without fault; what fails here fails for sure */
  looksFine(latching: number, name: CornerName): boolean {
    const { dialPositions } = this.options;
    const fails = failsOnTheWayUp(this.at(latching), this.corner(name, latching), this.options, dialPositions, this.effort, 'suitable');
    if (fails) this.failing = { at: latching, corner: name };
    return !fails;
  }

  /** at every corner, up and down */
  does(latching: number, first?: CornerName): boolean {
    const order = first === undefined ? {} : { first };
    const { grade, decisive } = overCorners(this.at(latching), this.options, this.effort, { goal: 'suitable', ...order });
    if (grade !== 'suitable') this.failing = { at: latching, corner: decisive.corner.name };
    return grade === 'suitable';
  }

  /** the largest current that does, given one that seems to and the failing one above it; null where none between does */
  edge(fine: number): number | null {
    let floor = fine;
    while (floor >= LEAST_LATCHING) {
      const looked = this.failing?.corner;
      const low = this.narrow(floor, (at, corner) => this.looksFine(at, corner));
      if (this.does(low, looked)) return low;
      // the way up misses what fails on the way down: from here on the whole dial is asked, from above, for the largest current that does
      const below = low > floor && this.failing?.corner === looked ? this.descend(floor) : null;
      if (below !== null) return this.narrow(below, (at, corner) => this.does(at, corner));
      // another corner fails sooner: now below this one
      if (low === floor || this.failing?.corner === looked) floor /= LADDER_RATIO;
    }
    return null;
  }

  /** the largest current found between one that is fine and the failing one above it, by halving; no finer than it is stated */
  private narrow(fine: number, isFine: (at: number, corner: CornerName) => boolean): number {
    let low = fine;
    while (this.failing !== null && this.failing.at / low > REQUIREMENT_RATIO) {
      const middle = Math.sqrt(low * this.failing.at);
      if (isFine(middle, this.failing.corner)) low = middle;
    }
    return low;
  }

  /** the first current that does on the way down from the failing one, no lower than `floor`; null where none was met */
  private descend(floor: number): number | null {
    for (let at = (this.failing?.at ?? 0) / DESCENT_RATIO; at >= floor; at /= DESCENT_RATIO) {
      if (this.does(at, this.failing?.corner)) return at;
    }
    return null;
  }

  point(latching: number): RequirementPoint {
    const { failing, ratio, options, effort } = this;
    const half = Math.max(LEAST_LATCHING, latching * PROBE_BELOW);
    // by every corner, up and down: what an upset at one place spares, another may not
    const smallerDoes = new Ray(this.pairing, ratio, options, effort).does(half, failing?.corner);
    const point = { latchingCurrent: latching, holdingCurrent: latching * ratio, smallerDoes };
    if (failing === null) return { ...point, failsAt: null, decidedBy: null, cause: null };
    return {
      ...point,
      failsAt: failing.at / latching,
      decidedBy: failing.corner,
      cause: stopCause(this.at(failing.at), this.failure(failing), effort),
    };
  }

  private failure({ at, corner }: { readonly at: number; readonly corner: CornerName }): JudgedCorner {
    return judgeCorner(this.at(at), this.corner(corner, at), this.options, 'suitable', this.effort);
  }

  /** what fails, in words; null where nothing was seen to */
  complaint(): string | null {
    const { failing } = this;
    return failing === null ? null : (this.failure(failing).graded.reasons[0]?.detail ?? null);
  }
}

/** a current that does, with the failing one above it noted on the ray; null where none of the ladder does */
function climb(ray: Ray): number | null {
  let does: number | null = null;
  for (let at = LEAST_LATCHING; at <= MOST_LATCHING * REQUIREMENT_RATIO; at *= LADDER_RATIO) {
    if (ray.does(at, ray.failing?.corner)) {
      does = at;
      // a failure below what does is not the edge that is sought
      ray.failing = null;
    } else if (does !== null) return does;
  }
  return does;
}

/**
 * A current that looks fine on this ray, with the failing one above it noted, from the neighbouring ray's point. Where smaller currents never
 * do worse the edge keeps either the neighbour's holding or its latching current, or lies between the two; so these are tried.
 */
function climbFrom(ray: Ray, { latchingCurrent, holdingCurrent, failsAt, decidedBy }: RequirementPoint): number {
  const corner = decidedBy ?? 'nominal';
  const beyond = failsAt ?? 1;
  const sameHolding = Math.min(holdingCurrent / ray.ratio, MOST_LATCHING);
  if (ray.looksFine(sameHolding, corner)) {
    let fine = sameHolding;
    let next = sameHolding * beyond;
    while (next <= MOST_LATCHING && ray.looksFine(next, corner)) {
      fine = next;
      next = Math.min(next * LADDER_RATIO, Math.max(MOST_LATCHING, next * REQUIREMENT_RATIO));
    }
    return fine;
  }
  return ray.looksFine(latchingCurrent * beyond, corner) ? latchingCurrent * beyond : latchingCurrent;
}

function summaryOf(points: readonly RequirementPoint[], complaint: string | null): string {
  if (points.length === 0) {
    return `No latching and holding currents (from ${1e3 * LEAST_LATCHING} mA up) make these lamps suitable on such a dimmer. ${complaint ?? ''}`.trim();
  }
  const milli = (a: number): string => String(Number((1e3 * a).toPrecision(3)));
  const most = (pick: (p: RequirementPoint) => number): number => Math.max(...points.map(pick));
  const [latching, holding] = [most((p) => p.latchingCurrent), most((p) => p.holdingCurrent)];
  const atOnce = points.some((p) => p.latchingCurrent * REQUIREMENT_RATIO >= latching && p.holdingCurrent * REQUIREMENT_RATIO >= holding);
  const plain = points.every((p) => p.smallerDoes);
  return `Look for a dimmer whose latching and holding currents (maxima at 25 degrees C) lie inside these points: at most ${milli(latching)} mA latching and ${milli(holding)} mA holding${atOnce ? '' : ', not both at once'}. ${
    plain
      ? 'At each point the lamps are suitable, with a little more of both currents they are not, and with half of both they are.'
      : 'With half of both currents some points are not suitable: a smaller current is not always better here, so judge the dimmer that is chosen.'
  }`;
}

export function requirementBoundary(pairing: Pairing, options: JudgeOptions): Outcome<Requirement> {
  const issues = [...checkPairing(pairing), ...checkOptions(options), ...checkJudgeExtras(options)];
  if (issues.length > 0) return { ok: false, failure: { kind: 'invalid-pairing', issues } };
  const effort = new EffortTally();
  const points: RequirementPoint[] = [];
  let complaint: string | null = null;
  for (const ratio of REQUIREMENT_RATIOS) {
    const ray = new Ray(pairing, ratio, options, effort);
    const neighbour = points[points.length - 1];
    const fine = neighbour === undefined ? climb(ray) : climbFrom(ray, neighbour);
    const latching = fine === null ? null : ray.edge(fine);
    if (latching !== null) points.push(ray.point(latching));
    else if (neighbour === undefined) {
      // nothing does where both currents are equal: a smaller holding current at the smallest latching current is hardly another case
      complaint = ray.complaint();
      break;
    }
  }
  return { ok: true, value: { points, summary: summaryOf(points, complaint), counters: effort.total } };
}
