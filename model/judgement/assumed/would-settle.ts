/**
 * Finds out whether a grade hinges on a value that was assumed: each is moved alone to both ends of its range, at the corner that
 * decides; where that turns a workable pairing into an unworkable one or back, the value at which it turns is bracketed.
 */
import type { Pairing } from '../../pairing.ts';
import type { CornerInputs, Grade, JudgeOptions, WouldSettle } from '../../verdict.ts';
import type { EffortTally } from '../effort.ts';
import { RANKING_HALVINGS, SETTLING_HALVINGS } from '../judgement-figures.ts';
import { isWorkable, type JudgedCorner, type OverCorners, overCorners } from '../over-corners.ts';
import { shown } from './assumable.ts';
import { type OpenValue, openValue } from './assumable-at.ts';
import { failsOnTheWayUp, topPositions, trialPositions } from './dial-trial.ts';

/** a value and the end of its range at which the grade has flipped */
interface Flip {
  readonly value: OpenValue;
  readonly end: number;
}

/** part of the way from the assumed value to the end */
const along = ({ value, end }: Flip, share: number): number => value.assumed + (end - value.assumed) * share;

/** degrees of the mains' half-cycle during which the triac no longer conducts, where that is most: how near a corner is to a drop-out */
function idleTail({ rows }: JudgedCorner): number {
  return Math.max(0, ...rows.map((r) => 180 - (r.firingAngle ?? 180) - (r.conductionAngle ?? 0)));
}

/** the corner at which a changed value is tried: the one that decides, or of several good ones the one nearest to a drop-out */
function cornerToTry({ grade, decisive, judged }: OverCorners): CornerInputs {
  if (!isWorkable(grade)) return decisive.corner;
  return judged.reduce((a, b) => (idleTail(b) > idleTail(a) ? b : a)).corner;
}

class Settling {
  private readonly options: JudgeOptions;
  private readonly effort: EffortTally;
  private readonly base: OverCorners;
  readonly corner: CornerInputs;

  constructor(base: OverCorners, options: JudgeOptions, effort: EffortTally) {
    this.base = base;
    this.options = options;
    this.effort = effort;
    this.corner = cornerToTry(base);
  }

  private gradeAt(pairing: Pairing): Grade {
    return overCorners(pairing, this.options, this.effort, { first: this.corner.name }).grade;
  }

  /** the grade's other side: unworkable where it works, workable where it does not */
  flipped(pairing: Pairing): boolean {
    const { options, corner, effort } = this;
    const works = isWorkable(this.base.grade);
    const trial = works ? trialPositions(options.dialPositions) : topPositions(options.dialPositions);
    const fails = failsOnTheWayUp(pairing, corner, options, trial, effort);
    // a full judgement only where the trial shows a change: it can be wrong about a down sweep, or about another corner
    if (fails !== works) return false;
    return isWorkable(this.gradeAt(pairing)) !== works;
  }

  /** of several flips the one nearest to the assumed value, as a share of the way to its end; and a share at which it has not flipped */
  nearest(flips: readonly Flip[]): { readonly flip: Flip; readonly from: number; readonly to: number } {
    let left = flips;
    let to = 1;
    for (let k = 0; k < RANKING_HALVINGS; k++) {
      const sooner = left.filter((f) => this.flipped(f.value.at(along(f, to / 2))));
      if (sooner.length === 0) return { flip: left[0] as Flip, from: to / 2, to };
      left = sooner;
      to /= 2;
    }
    return { flip: left[0] as Flip, from: 0, to };
  }

  bracket(flip: Flip, from: number, to: number): readonly [number, number] {
    let [kept, gone] = [from, to];
    while (gone - kept > 2 ** -SETTLING_HALVINGS) {
      const middle = (kept + gone) / 2;
      if (this.flipped(flip.value.at(along(flip, middle)))) gone = middle;
      else kept = middle;
    }
    return [along(flip, kept), along(flip, gone)];
  }

  gradeBeyond(flip: Flip, at: number): Grade {
    return this.gradeAt(flip.value.at(at));
  }
}

export function wouldSettle(pairing: Pairing, options: JudgeOptions, base: OverCorners, effort: EffortTally): WouldSettle | null {
  const values = (options.assumed ?? []).map((a) => openValue(pairing, a)).filter((v) => v !== null);
  if (values.length === 0 || base.grade === 'undetermined') return null;
  const settling = new Settling(base, options, effort);
  const flips = values
    .flatMap((value) => [value.low, value.high].filter((end) => end !== value.assumed).map((end): Flip => ({ value, end })))
    .filter(({ value, end }) => settling.flipped(value.at(end)));
  if (flips.length === 0) return null;
  const { flip, from, to } = settling.nearest(flips);
  const [kept, gone] = settling.bracket(flip, from, to);
  const beyond = settling.gradeBeyond(flip, gone);
  const { path, about, assumed } = flip.value;
  const threshold = { low: Math.min(kept, gone), high: Math.max(kept, gone) };
  const upward = gone > kept;
  const [gradeBelow, gradeAbove] = upward ? [base.grade, beyond] : [beyond, base.grade];
  const worksAbove = isWorkable(gradeAbove);
  return {
    path,
    what: about.what,
    assumed,
    threshold,
    gradeBelow,
    gradeAbove,
    corner: settling.corner.name,
    measure: about.measure,
    detail: `It hinges on ${about.what}, which was assumed (${shown(about, assumed)}): ${worksAbove ? 'above' : 'below'} about ${shown(about, (kept + gone) / 2)} the lamps run, ${worksAbove ? 'below' : 'above'} it they do not.`,
    alsoOpen: [...new Set(flips.map((f) => f.value.path))].filter((p) => p !== path),
  };
}
