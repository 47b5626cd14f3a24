/**
 * Finds out whether a grade hinges on a value that was assumed: each is moved alone to both ends of its range, at the corner that
 * decides; where that turns a workable pairing into an unworkable one or back, the value at which it turns is bracketed. Kept cheap by
 * trying a few dial positions first: an upset on a narrow part of the dial can go unnoticed.
 */
import type { Pairing } from '../../pairing.ts';
import type { CornerInputs, JudgeOptions, ValueWouldSettle } from '../../verdict.ts';
import { failsOnTheWayUp, topPositions, trialPositions } from '../dial-trial.ts';
import type { EffortTally } from '../effort.ts';
import { RANKING_HALVINGS, SETTLING_HALVINGS, SURE_TRIES } from '../judgement-figures.ts';
import { isWorkable, type JudgedCorner, judgeCorner, type OverCorners, overCorners } from '../over-corners.ts';
import { shown } from './assumable.ts';
import { type OpenValue, openValue } from './assumable-at.ts';

/** a value and the end of its range at which the grade has flipped */
interface Flip {
  readonly value: OpenValue;
  readonly end: number;
}

/** part of the way from the assumed value to the end */
const along = ({ value, end }: Flip, share: number): number => value.assumed + (end - value.assumed) * share;

/** smallest relative change of a current or voltage that would have brought another outcome about somewhere on the dial */
function nearness({ rows }: JudgedCorner): number {
  const margins = rows.flatMap((r) => [r.margins.latching, r.margins.holding, r.margins.breakover]).filter((m) => m !== null);
  return Math.min(Number.POSITIVE_INFINITY, ...margins);
}

/** the corner at which a changed value is tried: the one that decides, or of several good ones the one nearest to another outcome */
function cornerToTry({ grade, decisive, judged }: OverCorners): CornerInputs {
  if (!isWorkable(grade)) return decisive.corner;
  return judged.reduce((a, b) => (nearness(b) < nearness(a) ? b : a)).corner;
}

class Settling {
  private readonly options: JudgeOptions;
  private readonly effort: EffortTally;
  /** whether the pairing is workable with the values as assumed */
  readonly works: boolean;
  /** at which changed values are tried */
  readonly corner: CornerInputs;

  constructor(base: OverCorners, options: JudgeOptions, effort: EffortTally) {
    this.works = isWorkable(base.grade);
    this.options = options;
    this.effort = effort;
    this.corner = cornerToTry(base);
  }

  over(pairing: Pairing): OverCorners {
    return overCorners(pairing, this.options, this.effort, { first: this.corner.name });
  }

  /** whether a few dial positions say that the pairing works where it did not, or does not where it did */
  looksFlipped(pairing: Pairing): boolean {
    const { options, corner, effort } = this;
    const positions = this.works ? trialPositions(options.dialPositions) : topPositions(options.dialPositions);
    return failsOnTheWayUp(pairing, corner, options, positions, effort) === this.works;
  }

  /** the same by the whole dial at the corner that is tried; a down sweep may contradict the trial */
  isFlipped(pairing: Pairing): boolean {
    if (!this.looksFlipped(pairing)) return false;
    const { graded } = judgeCorner(pairing, this.corner, this.options, 'grade', this.effort);
    return isWorkable(graded.grade) !== this.works;
  }

  /** of several flips the one nearest to the assumed value, as a share of the way to its end */
  nearest(flips: readonly Flip[]): Flip {
    let left = flips;
    for (let k = 1, share = 0.5; k <= RANKING_HALVINGS && left.length > 1; k++, share /= 2) {
      const sooner = left.filter((f) => this.looksFlipped(f.value.at(along(f, share))));
      if (sooner.length === 0) break;
      left = sooner;
    }
    return left[0] as Flip;
  }

  /**
   * The shares of the way up to which the grade stays and from which it has flipped, over every corner: found at the corner that is tried,
   * and sought again over all of them where another corner flips sooner, or still holds the old grade there.
   */
  bracket(flip: Flip): Bracket {
    const atCorner = (share: number): boolean => this.isFlipped(flip.value.at(along(flip, share)));
    const overall = (share: number): boolean => isWorkable(this.over(flip.value.at(along(flip, share))).grade) !== this.works;
    const found = halved({ kept: 0, gone: 1 }, atCorner);
    if (overall(found.kept)) return halved({ kept: 0, gone: found.kept }, overall);
    return overall(found.gone) ? found : halved({ kept: found.gone, gone: 1 }, overall);
  }
}

interface Bracket {
  readonly kept: number;
  readonly gone: number;
}

function halved({ kept, gone }: Bracket, hasFlipped: (share: number) => boolean): Bracket {
  while (gone - kept > 2 ** -SETTLING_HALVINGS) {
    const middle = (kept + gone) / 2;
    if (hasFlipped(middle)) gone = middle;
    else kept = middle;
  }
  return { kept, gone };
}

/** the nearest flip that holds at every corner, and the values for which it might */
function nearestSureFlip(settling: Settling, values: readonly OpenValue[]): { flip: Flip; candidates: readonly Flip[] } | null {
  const ends = values.flatMap((value) =>
    [value.low, value.high].filter((end) => end !== value.assumed).map((end): Flip => ({ value, end })),
  );
  const candidates = ends.filter(({ value, end }) => settling.looksFlipped(value.at(end)));
  let left = candidates;
  for (let tries = 0; tries < SURE_TRIES && left.length > 0; tries++) {
    const flip = settling.nearest(left);
    if (isWorkable(settling.over(flip.value.at(flip.end)).grade) !== settling.works) return { flip, candidates };
    left = left.filter((f) => f !== flip);
  }
  return null;
}

export function wouldSettle(pairing: Pairing, options: JudgeOptions, base: OverCorners, effort: EffortTally): ValueWouldSettle | null {
  const values = (options.assumed ?? []).map((a) => openValue(pairing, a)).filter((v) => v !== null);
  if (values.length === 0 || base.grade === 'undetermined') return null;
  const settling = new Settling(base, options, effort);
  const found = nearestSureFlip(settling, values);
  if (found === null) return null;
  const { flip, candidates } = found;
  const { path, about, assumed } = flip.value;
  const bracket = settling.bracket(flip);
  const [kept, gone] = [along(flip, bracket.kept), along(flip, bracket.gone)];
  const [before, beyond] = [settling.over(flip.value.at(kept)), settling.over(flip.value.at(gone))];
  const [below, above] = gone > kept ? [before, beyond] : [beyond, before];
  const [runs, fails] = isWorkable(above.grade) ? ['above', 'below'] : ['below', 'above'];
  return {
    kind: 'value',
    path,
    what: about.what,
    assumed,
    threshold: { low: Math.min(kept, gone), high: Math.max(kept, gone) },
    gradeBelow: below.grade,
    gradeAbove: above.grade,
    corner: (settling.works ? beyond : before).decisive.corner.name,
    measure: about.measure,
    detail: `It hinges on ${about.what}, which was assumed (${shown(about, assumed)}): ${runs} about ${shown(about, (kept + gone) / 2)} the lamps run, ${fails} it they do not.`,
    alsoOpen: [...new Set(candidates.map((f) => f.value.path))].filter((p) => p !== path),
  };
}
