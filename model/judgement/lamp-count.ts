/**
 * Grades every lamp count of a range by simulation. Nothing is bisected: more lamps hold better, but ring harder and load the dimmer
 * more, so workable counts need not be one unbroken run.
 */
import type { Outcome } from '../failures.ts';
import type { Pairing } from '../pairing.ts';
import { checkOptions, checkPairing, type Issue } from '../pairing-check.ts';
import type { CountGrade, CountRange, JudgeOptions, LampCounts, StopCause } from '../verdict.ts';
import { EffortTally } from './effort.ts';
import { MOST_COUNTS } from './judgement-figures.ts';
import { checkJudgeExtras } from './options-check.ts';
import { isWorkable, overCorners } from './over-corners.ts';
import { ratingReasons } from './ratings.ts';
import { stopCause } from './stop-cause.ts';

const CAUSE_WORDS: Record<StopCause, string> = {
  holding: 'the lamps draw less than the holding current',
  latching: 'the lamps draw less than the latching current while the gate is on',
  ringing: 'the ring of lamps, wiring and dimmer pulls the current below the holding current',
  'peak-current': "the current's peak passes the dimmer's rating",
  rating: "the dimmer's ratings do not allow it",
  dark: 'the lamps stay dark',
  lopsided: 'the two polarities differ',
  uneven: 'half-cycles differ',
  undecided: 'it could not be decided',
};

export function withCount(pairing: Pairing, group: number, count: number): Pairing {
  return { ...pairing, lamps: pairing.lamps.map((g, k) => (k === group ? { ...g, count } : g)) };
}

function checkRange(pairing: Pairing, { from, to, group }: CountRange): Issue[] {
  const issues: Issue[] = [];
  if (!(Number.isInteger(from) && from >= 1)) issues.push({ path: 'lampCount.from', message: 'must be a whole number, 1 or more' });
  if (!(Number.isInteger(to) && to >= from && to - from < MOST_COUNTS)) {
    issues.push({ path: 'lampCount.to', message: `must be a whole number from lampCount.from to ${MOST_COUNTS - 1} above it` });
  }
  if (pairing.lamps[group] === undefined) issues.push({ path: 'lampCount.group', message: 'must be the index of a lamp group' });
  return issues;
}

function gradeCount(pairing: Pairing, count: number, options: JudgeOptions, effort: EffortTally): CountGrade {
  // a load rating needs no simulation
  const [rating] = options.thorough === true ? [] : ratingReasons(pairing, []);
  if (rating !== undefined) {
    return { count, grade: 'unsuitable', decidedBy: 'nominal', lowestDial: null, cause: 'rating', detail: rating.detail };
  }
  const { grade, lowestDial, decisive } = overCorners(pairing, options, effort);
  const decidedBy = decisive.corner.name;
  if (isWorkable(grade)) {
    const detail = lowestDial === null ? 'Steady wherever lit.' : `Steady from ${lowestDial} % of the dial up.`;
    return { count, grade, decidedBy, lowestDial, cause: null, detail };
  }
  const cause = stopCause(pairing, decisive, effort);
  const tells = decisive.graded.reasons.find((r) => r.code !== 'pop-on' && r.code !== 'dark-low-on-dial');
  return { count, grade, decidedBy, lowestDial, cause, detail: tells?.detail ?? `Not steady: ${CAUSE_WORDS[cause]}.` };
}

const lamps = (count: number): string => (count === 1 ? 'one lamp' : `${count} lamps`);

const span = (from: number, to: number): string => (from === to ? lamps(from) : `${from} to ${lamps(to)}`);

function summaryOf(
  grades: readonly CountGrade[],
  workable: readonly CountGrade[],
  below: StopCause | null,
  above: StopCause | null,
): string {
  const [first, last] = [grades[0], grades[grades.length - 1]];
  const [smallest, largest] = [workable[0], workable[workable.length - 1]];
  if (first === undefined || last === undefined) return 'No count was asked for.';
  if (smallest === undefined || largest === undefined) {
    const causes = [...new Set(grades.map((g) => g.cause))].map((c) => (c === null ? '' : CAUSE_WORDS[c]));
    return `Not steady with ${span(first.count, last.count)}: ${causes.join('; ')}.`;
  }
  const gaps = grades.filter((g) => g.count > smallest.count && g.count < largest.count && !isWorkable(g.grade)).map((g) => g.count);
  const parts = [`Steady with ${span(smallest.count, largest.count)}${gaps.length === 0 ? '' : `, but not with ${gaps.join(', ')}`}.`];
  if (below !== null) parts.push(`With fewer, ${CAUSE_WORDS[below]}.`);
  if (above !== null) parts.push(`With more, ${CAUSE_WORDS[above]}.`);
  return parts.join(' ');
}

export function judgeCounts(pairing: Pairing, range: CountRange, options: JudgeOptions): Outcome<LampCounts> {
  const issues = [...checkPairing(pairing), ...checkOptions(options), ...checkJudgeExtras(options), ...checkRange(pairing, range)];
  if (issues.length > 0) return { ok: false, failure: { kind: 'invalid-pairing', issues } };
  const effort = new EffortTally();
  const grades: CountGrade[] = [];
  for (let count = range.from; count <= range.to; count++) {
    grades.push(gradeCount(withCount(pairing, range.group, count), count, options, effort));
  }
  const workable = grades.filter((g) => isWorkable(g.grade));
  const smallest = workable[0]?.count ?? null;
  const largest = workable[workable.length - 1]?.count ?? null;
  const below = grades.findLast((g) => smallest !== null && g.count < smallest)?.cause ?? null;
  const above = grades.find((g) => largest !== null && g.count > largest)?.cause ?? null;
  return {
    ok: true,
    value: {
      counts: grades,
      smallest,
      largest,
      unbroken: smallest !== null && largest !== null && workable.length === largest - smallest + 1,
      below,
      above,
      summary: summaryOf(grades, workable, below, above),
      counters: effort.total,
    },
  };
}
