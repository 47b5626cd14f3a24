/**
 * What the stored verdicts of a dimmer and a lamp say together, for one lamp count or over all counts that were judged. Only counts that
 * were judged are spoken of: what lies between two of them is not known, since more lamps are not always better.
 */
import type { PairVerdictRow } from '../../db/judged-pairs.ts';
import type { Grade } from '../../model/index.ts';
import { isAt, type Mains } from '../catalogue/pair-verdicts.ts';

export interface CountOutcome {
  readonly count: number;
  readonly grade: Grade;
  /** %; null where the whole dial is steady, or none of it */
  readonly lowestDial: number | null;
  /** the verdict that says so */
  readonly verdict: PairVerdictRow;
}

export interface JudgedStanding {
  readonly kind: 'judged';
  readonly grade: Grade;
  /** lamp counts that the grade is about: those that work, or where none does all that were judged; rising */
  readonly counts: readonly number[];
  readonly judgedCounts: readonly number[];
  /** %; the lowest dial setting at which all of `counts` are steady; null where the whole dial is */
  readonly lowestDial: number | null;
  readonly mains: Mains;
  /** what it rests on, by rising count */
  readonly outcomes: readonly CountOutcome[];
}

export type PairStanding =
  | JudgedStanding
  /** `outdated` where there are verdicts, but none of what the catalogue says now */
  | { readonly kind: 'not-screened'; readonly outdated: boolean };

export interface StandingQuestion {
  readonly count: number | undefined;
  /** absent: the mains of the newest verdict that holds */
  readonly mains: Mains | undefined;
}

/** verdicts of a pair that are read whole, the newest: each takes a fraction of a millisecond */
const MOST_READ = 60;

/** `rows` are newest first; `outcomesOf` reads a verdict: its own outcome, and those of other counts that it was asked about. */
export function pairStanding(
  rows: readonly PairVerdictRow[],
  { count, mains }: StandingQuestion,
  outcomesOf: (verdict: PairVerdictRow) => readonly CountOutcome[],
): PairStanding {
  const wanted = rows.filter(isAt(mains));
  const holding = wanted.filter(({ stale }) => stale === 0);
  const notScreened = {
    kind: 'not-screened',
    outdated: wanted.some(({ lamp_count }) => count === undefined || lamp_count === count),
  } as const;
  const newest = holding.find(({ lamp_count }) => lamp_count === count) ?? holding[0];
  if (newest === undefined) return notScreened;

  const at = { voltage_V: newest.mains_voltage, frequency_Hz: newest.mains_frequency };
  const all = outcomesByCount(holding.filter(isAt(at)).slice(0, MOST_READ), outcomesOf);
  const outcomes = count === undefined ? all : all.filter((outcome) => outcome.count === count);
  if (outcomes.length === 0) return notScreened;

  const working = outcomes.filter(({ grade }) => grade === 'suitable' || grade === 'conditional');
  const spokenOf = working.length > 0 ? working : outcomes;
  const dials = working.flatMap(({ lowestDial }) => lowestDial ?? []);
  return {
    kind: 'judged',
    grade: gradeOf(outcomes, working),
    counts: spokenOf.map((outcome) => outcome.count),
    judgedCounts: outcomes.map((outcome) => outcome.count),
    lowestDial: dials.length === 0 ? null : Math.max(...dials),
    mains: at,
    outcomes,
  };
}

/** For each count the newest verdict of that very count; else the newest that was asked about it beside its own. */
function outcomesByCount(
  rows: readonly PairVerdictRow[],
  outcomesOf: (verdict: PairVerdictRow) => readonly CountOutcome[],
): readonly CountOutcome[] {
  const own = new Map<number, CountOutcome>();
  const others = new Map<number, CountOutcome>();
  for (const outcome of rows.flatMap(outcomesOf)) {
    const kept = outcome.count === outcome.verdict.lamp_count ? own : others;
    if (!kept.has(outcome.count)) kept.set(outcome.count, outcome);
  }
  return [...new Map([...others, ...own]).values()].sort((a, b) => a.count - b.count);
}

/** Suitable only where every judged count is; that some counts work and others do not is a condition. */
function gradeOf(outcomes: readonly CountOutcome[], working: readonly CountOutcome[]): Grade {
  if (outcomes.every(({ grade }) => grade === 'suitable')) return 'suitable';
  if (working.length > 0) return 'conditional';
  return outcomes.some(({ grade }) => grade === 'undetermined') ? 'undetermined' : 'unsuitable';
}
