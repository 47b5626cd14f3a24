/**
 * Judges a changed pairing at every corner, cheaply where it is no better than the pairing it is to cure, and says of a cure whether it
 * hinges on a value that was only assumed.
 */
import type { Pairing } from '../../pairing.ts';
import type { CornerName, Grade, JudgeOptions, ValueWouldSettle } from '../../verdict.ts';
import { wouldSettle } from '../assumed/would-settle.ts';
import { failsOnTheWayUp, topPositions } from '../dial-trial.ts';
import type { EffortTally } from '../effort.ts';
import { isWorse, type OverCorners, overCorners } from '../over-corners.ts';

export interface Trial {
  readonly grade: Grade;
  readonly lowestDial: number | null;
  readonly over: OverCorners;
  /** what was judged */
  readonly pairing: Pairing;
  readonly options: JudgeOptions;
}

/** What is to be cured, and how its cures are tried. */
export class Patient {
  readonly pairing: Pairing;
  readonly options: JudgeOptions;
  readonly effort: EffortTally;
  readonly base: OverCorners;
  /** the corner that failed last: the next candidate most likely fails there too */
  private hardest: CornerName;

  constructor(pairing: Pairing, options: JudgeOptions, effort: EffortTally) {
    this.pairing = pairing;
    this.options = options;
    this.effort = effort;
    this.base = overCorners(pairing, options, effort);
    this.hardest = this.base.decisive.corner.name;
  }

  /** null where the changed pairing is no better */
  try(changed: Pairing, dialPositions: readonly number[] = this.options.dialPositions): Trial | null {
    const { base, effort, hardest } = this;
    const options = { ...this.options, dialPositions };
    const { corner } = base.decisive;
    // switched on at the top of the dial it must be steady at once: this passes over a cure that only works for who comes up from dark
    if (failsOnTheWayUp(changed, corner, options, topPositions(dialPositions), effort)) return null;
    const goal = base.grade === 'conditional' ? 'suitable' : 'grade';
    const over = overCorners(changed, options, effort, { goal, first: hardest });
    this.hardest = over.decisive.corner.name;
    if (!isWorse(base.grade, over.grade) || over.grade === 'undetermined') return null;
    return { grade: over.grade, lowestDial: over.lowestDial, over, pairing: changed, options };
  }

  /** the assumed value that would undo the cure within its usual range; null where none does */
  hingesOn({ pairing, options, over }: Trial): ValueWouldSettle | null {
    return wouldSettle(pairing, options, over, this.effort);
  }
}

/** what every remedy says of its trial, whatever its kind */
export function outcomeOf(patient: Patient, trial: Trial, does: string) {
  const hingesOn = patient.hingesOn(trial);
  const open = hingesOn === null ? '' : ` ${hingesOn.detail}`;
  return { grade: trial.grade, lowestDial: trial.lowestDial, hingesOn, detail: `${does}${stillNeedsTrim(trial)}${open}` };
}

/** the sentence part that a conditional cure needs */
const stillNeedsTrim = ({ lowestDial }: Pick<Trial, 'lowestDial'>): string =>
  lowestDial === null ? '' : ` The low-end trim must also keep the dial at ${lowestDial} % or above.`;
