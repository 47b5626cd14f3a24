/**
 * What the stored verdicts of a dimmer and a lamp say together, for one lamp count or over all counts that were judged. Only counts that
 * were judged are spoken of: what lies between two of them is not known, since more lamps are not always better.
 */
import type { PairVerdictRow } from '../../db/judged-pairs.ts';
import type { Grade } from '../../model/index.ts';
import { isAt, type Mains } from '../catalogue/pair-verdicts.ts';

export interface JudgedStanding {
  readonly kind: 'judged';
  readonly grade: Grade;
  /** lamp counts that the grade is about: those that work, or where none does all that were judged; rising */
  readonly counts: readonly number[];
  readonly judgedCounts: readonly number[];
  /** %; the lowest dial setting at which all of `counts` are steady; null where the whole dial is */
  readonly lowestDial: number | null;
  readonly mains: Mains;
  /** the verdicts it rests on, by rising count */
  readonly verdicts: readonly PairVerdictRow[];
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

/** `rows` are newest first; `lowestDialOf` reads the lowest dial setting of a conditional verdict, in %. */
export function pairStanding(
  rows: readonly PairVerdictRow[],
  { count, mains }: StandingQuestion,
  lowestDialOf: (verdict: PairVerdictRow) => number | null,
): PairStanding {
  const wanted = rows.filter((row) => isAt(mains)(row) && (count === undefined || row.lamp_count === count));
  const holding = wanted.filter(({ stale }) => stale === 0);
  const [newest] = holding;
  if (newest === undefined) return { kind: 'not-screened', outdated: wanted.length > 0 };

  const at = { voltage_V: newest.mains_voltage, frequency_Hz: newest.mains_frequency };
  const verdicts = newestOfEachCount(holding.filter(isAt(at)));
  const working = verdicts.filter(({ grade }) => grade === 'suitable' || grade === 'conditional');
  const spokenOf = working.length > 0 ? working : verdicts;
  const dials = working.filter(({ grade }) => grade === 'conditional').flatMap((verdict) => lowestDialOf(verdict) ?? []);
  return {
    kind: 'judged',
    grade: gradeOf(verdicts, working),
    counts: spokenOf.map(({ lamp_count }) => lamp_count),
    judgedCounts: verdicts.map(({ lamp_count }) => lamp_count),
    lowestDial: dials.length === 0 ? null : Math.max(...dials),
    mains: at,
    verdicts,
  };
}

function newestOfEachCount(rows: readonly PairVerdictRow[]): readonly PairVerdictRow[] {
  const newest = new Map<number, PairVerdictRow>();
  for (const row of rows) if (!newest.has(row.lamp_count)) newest.set(row.lamp_count, row);
  return [...newest.values()].sort((a, b) => a.lamp_count - b.lamp_count);
}

/** Suitable only where every judged count is; that some counts work and others do not is a condition. */
function gradeOf(verdicts: readonly PairVerdictRow[], working: readonly PairVerdictRow[]): Grade {
  if (verdicts.every(({ grade }) => grade === 'suitable')) return 'suitable';
  if (working.length > 0) return 'conditional';
  return verdicts.some(({ grade }) => grade === 'undetermined') ? 'undetermined' : 'unsuitable';
}
