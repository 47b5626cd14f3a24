/**
 * Grades a pairing over its corners: the worst corner decides. Ends early: a corner's sweep stops once its grade is known, and no
 * further corner is judged once one is unsuitable, since none can make that better.
 */
import type { Pairing } from '../pairing.ts';
import type { CornerInputs, CornerName, CornerResult, DialRow, Grade, JudgeOptions } from '../verdict.ts';
import { atCorner, cornersOf } from './corners.ts';
import { visitDial } from './dial-visit.ts';
import type { Goal } from './early-ending.ts';
import type { EffortTally } from './effort.ts';
import { type CornerGrade, gradeDial } from './grade.ts';

export interface JudgedCorner {
  readonly corner: CornerInputs;
  /** up to the stop at which the grade was decided */
  readonly rows: readonly DialRow[];
  readonly graded: CornerGrade;
}

export interface OverCorners {
  readonly grade: Grade;
  /** lowest dial setting that serves every corner; null unless conditional */
  readonly lowestDial: number | null;
  readonly decisive: JudgedCorner;
  readonly judged: readonly JudgedCorner[];
  readonly spared: readonly CornerName[];
}

const BADNESS: Record<Grade, number> = { suitable: 0, conditional: 1, undetermined: 2, unsuitable: 3 };

export const isWorse = (a: Grade, b: Grade): boolean => BADNESS[a] > BADNESS[b];
export const isWorkable = (grade: Grade): boolean => grade === 'suitable' || grade === 'conditional';

export const lowestDialOf = ({ conditions }: CornerGrade): number | null => conditions[0]?.position ?? null;

/** with the goal "suitable" a corner that is cut short counts as whatever its rows so far show, at best conditional */
export function judgeCorner(pairing: Pairing, corner: CornerInputs, options: JudgeOptions, goal: Goal, effort: EffortTally): JudgedCorner {
  const there = atCorner(pairing, corner);
  const rows = visitDial(there, options, goal, effort);
  return { corner, rows, graded: gradeDial(there, rows) };
}

/** of several corners with one grade the first decides, but of several conditional ones the one that asks for the highest dial setting */
function worst(judged: readonly JudgedCorner[]): JudgedCorner | undefined {
  return judged.reduce<JudgedCorner | undefined>((before, now) => {
    if (before === undefined || isWorse(now.graded.grade, before.graded.grade)) return now;
    const higher = (lowestDialOf(now.graded) ?? 0) > (lowestDialOf(before.graded) ?? 0);
    return now.graded.grade === before.graded.grade && higher ? now : before;
  }, undefined);
}

/**
 * `known`: corners that were judged before, nominal first. `order`: corner to try first, where there is reason to expect it to fail.
 */
export function overCorners(
  pairing: Pairing,
  options: JudgeOptions,
  effort: EffortTally,
  {
    goal = 'grade',
    known = [],
    first,
  }: { readonly goal?: Goal; readonly known?: readonly JudgedCorner[]; readonly first?: CornerName } = {},
): OverCorners {
  const corners = cornersOf(pairing, options).filter((c) => !known.some((k) => k.corner.name === c.name));
  corners.sort((a, b) => Number(b.name === first) - Number(a.name === first));
  const judged = [...known];
  const failed = (j: JudgedCorner): boolean => j.graded.grade === 'unsuitable' || (goal === 'suitable' && j.graded.grade !== 'suitable');
  let ended = options.thorough !== true && judged.some(failed);
  const spared: CornerName[] = [];
  for (const corner of corners) {
    if (ended) {
      spared.push(corner.name);
      effort.spared(stopsOf(options));
      continue;
    }
    const now = judgeCorner(pairing, corner, options, goal, effort);
    judged.push(now);
    ended = options.thorough !== true && failed(now);
  }
  const decisive = worst(judged);
  if (decisive === undefined) throw new Error('a pairing has at least its nominal corner');
  return { grade: decisive.graded.grade, lowestDial: lowestDialOf(decisive.graded), decisive, judged, spared };
}

const stopsOf = ({ dialPositions }: JudgeOptions): number => (dialPositions.length < 2 ? 1 : 2 * dialPositions.length);

export function cornerResult({ corner, graded }: JudgedCorner): CornerResult {
  return { ...corner, grade: graded.grade, lowestDial: lowestDialOf(graded) };
}
