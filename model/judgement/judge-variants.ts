/**
 * Judges a pairing whose lamps are known only as a range of circuits: every circuit is graded over the corners, and the worst one is
 * shown. Where some work and others do not, the grade is undetermined and says what to ask for.
 */
import type { Outcome } from '../failures.ts';
import type { Pairing } from '../pairing.ts';
import { checkOptions, checkPairing } from '../pairing-check.ts';
import type { Judgement, JudgeOptions, VariantGrade } from '../verdict.ts';
import { EffortTally } from './effort.ts';
import { judgeChecked } from './judge-pairing.ts';
import { checkJudgeExtras } from './options-check.ts';
import { isWorkable, isWorse, overCorners } from './over-corners.ts';

export interface Variant {
  /** which of the possible circuits it is, in words */
  readonly name: string;
  readonly pairing: Pairing;
}

function issuesOf(variants: readonly Variant[], options: JudgeOptions) {
  const ofOptions = [...checkOptions(options), ...checkJudgeExtras(options)];
  const none = variants.length === 0 ? [{ path: 'variants', message: 'must hold at least one circuit' }] : [];
  return [...ofOptions, ...none, ...variants.flatMap((v) => checkPairing(v.pairing))];
}

const listed = (variants: readonly VariantGrade[]): string => variants.map((v) => v.name).join('; ');

/** `ask`: what to ask the lamp's maker for where the circuits are judged both ways */
export function judgeVariants(variants: readonly Variant[], ask: string, options: JudgeOptions): Outcome<Judgement> {
  const issues = issuesOf(variants, options);
  if (issues.length > 0) return { ok: false, failure: { kind: 'invalid-pairing', issues } };
  const effort = new EffortTally();
  const graded = variants.map(({ name, pairing }) => {
    const { grade, lowestDial, decisive } = overCorners(pairing, options, effort);
    return { pairing, verdict: { name, grade, lowestDial, decidedBy: decisive.corner.name } };
  });
  const worst = graded.reduce((a, b) => {
    const higher = (b.verdict.lowestDial ?? 0) > (a.verdict.lowestDial ?? 0);
    return isWorse(b.verdict.grade, a.verdict.grade) || (b.verdict.grade === a.verdict.grade && higher) ? b : a;
  });
  const grades: readonly VariantGrade[] = graded.map((g) => ({ ...g.verdict, shown: g === worst }));
  const works = grades.filter((g) => isWorkable(g.grade));
  const fails = grades.filter((g) => g.grade === 'unsuitable');
  if (works.length > 0 && fails.length > 0) {
    // which circuit the lamps have decides more than any assumed value of the dimmer
    const { assumed: _, ...given } = options;
    const judgement = judgeChecked(worst.pairing, given, effort);
    const detail = `It depends on the circuit inside the lamps, of which only the class is known: steady with ${listed(works)}; not with ${listed(fails)}. Ask the maker for ${ask}.`;
    return {
      ok: true,
      value: {
        ...judgement,
        grade: 'undetermined',
        summary: detail,
        conditions: [],
        wouldSettle: { kind: 'circuit', ask, detail },
        variants: grades,
      },
    };
  }
  return { ok: true, value: { ...judgeChecked(worst.pairing, options, effort), variants: grades } };
}
