/**
 * Judges one pairing: checks it, sweeps the dial at the nominal corner, then as many other corners as can still change the grade, and
 * asks whether the grade hinges on a value that was only assumed.
 */
import type { Outcome } from '../failures.ts';
import type { Pairing } from '../pairing.ts';
import { checkOptions, checkPairing } from '../pairing-check.ts';
import type { DialRow, Judgement, JudgeOptions, Reason } from '../verdict.ts';
import { wouldSettle } from './assumed/would-settle.ts';
import { cornersOf } from './corners.ts';
import { visitWholeDial } from './dial-visit.ts';
import { EffortTally } from './effort.ts';
import { gradeDial, lowestDialCondition } from './grade.ts';
import { checkJudgeExtras } from './options-check.ts';
import { cornerResult, type JudgedCorner, type OverCorners, overCorners } from './over-corners.ts';
import { summarize, summarizeCorner } from './summary.ts';

export function judgePairing(pairing: Pairing, options: JudgeOptions): Outcome<Judgement> {
  const issues = [...checkPairing(pairing), ...checkOptions(options), ...checkJudgeExtras(options)];
  if (issues.length > 0) return { ok: false, failure: { kind: 'invalid-pairing', issues } };
  return { ok: true, value: judgeChecked(pairing, options, new EffortTally()) };
}

/** for a pairing and options that were checked; `effort` may already hold the work that led to it */
export function judgeChecked(pairing: Pairing, options: JudgeOptions, effort: EffortTally): Judgement {
  // the nominal corner is the evidence that is shown: always the whole dial
  const rows = visitWholeDial(pairing, options, effort);
  const nominal: JudgedCorner = { corner: nominalOf(pairing), rows, graded: gradeDial(pairing, rows) };
  const over = overCorners(pairing, options, effort, { known: [nominal] });
  const settle = options.corners === 'all' ? wouldSettle(pairing, options, over, effort) : null;
  return {
    grade: settle === null ? over.grade : 'undetermined',
    summary: settle === null ? summaryOf(pairing, rows, nominal, over) : settle.detail,
    conditions: settle === null && over.lowestDial !== null ? [lowestDialCondition(over.lowestDial)] : [],
    reasons: [...nominal.graded.reasons, ...cornerReasons(over)],
    dial: rows,
    popOn: nominal.graded.popOn,
    corners: over.judged.map(cornerResult),
    sparedCorners: over.spared,
    decidedBy: over.decisive.corner.name,
    wouldSettle: settle,
    variants: [],
    counters: effort.total,
  };
}

function nominalOf(pairing: Pairing): JudgedCorner['corner'] {
  const [corner] = cornersOf(pairing, { corners: 'nominal' });
  if (corner === undefined) throw new Error('the nominal corner is always there');
  return corner;
}

function cornerReasons({ decisive }: OverCorners): Reason[] {
  const { name } = decisive.corner;
  return name === 'nominal' ? [] : decisive.graded.reasons.map((r) => ({ ...r, corner: name }));
}

function summaryOf(pairing: Pairing, rows: readonly DialRow[], nominal: JudgedCorner, over: OverCorners): string {
  return over.decisive.corner.name === 'nominal'
    ? summarize(pairing, rows, nominal.graded)
    : summarizeCorner(pairing, rows, nominal.graded, over.decisive);
}
