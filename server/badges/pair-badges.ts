/**
 * The badges of pairs. A badge comes with the stamp of what it was made from, the circuits of both entries and their last tie: while the
 * stamp is the same, so is the badge. No write has to know of badges, and none is missed.
 */
import type { EntryStore } from '../../db/entries.ts';
import type { JudgedPairs, PairVerdictRow } from '../../db/judged-pairs.ts';
import type { RecordChanges } from '../../db/record-changes.ts';
import type { VerdictStore } from '../../db/verdicts.ts';
import { MOST_OF_PAIR } from '../catalogue/pair-verdicts.ts';
import type { BadgeAnswer } from '../schemas/badge-calls.ts';
import type { AskedJudgement } from '../simulation/asked-circuit.ts';
import { badgePicture } from './badge-picture.ts';
import { type BadgeWords, badgeWords } from './badge-words.ts';
import { type CountOutcome, type PairStanding, pairStanding, type StandingQuestion } from './pair-standing.ts';

export type BadgeForm = 'svg' | 'json';

export interface BadgeDependencies {
  readonly entries: EntryStore;
  readonly verdicts: VerdictStore;
  readonly judgedPairs: JudgedPairs;
  readonly recordChanges: RecordChanges;
}

export type PairBadge =
  | { readonly ok: true; readonly text: string; readonly holds: () => boolean }
  | { readonly ok: false; readonly missing: 'dimmer' | 'lamp' };

export type PairBadges = (form: BadgeForm, dimmerId: string, lampId: string, question: StandingQuestion) => PairBadge;

/** Of a model version that judged no lamp counts, `lampCounts` is not there. */
type StoredJudgement = Pick<AskedJudgement, 'conditions'> & Partial<Pick<AskedJudgement, 'lampCounts'>>;

const CAUTION = 'A screening by simulation, not a type test. Follow both makers’ instructions; work on the mains is for a licensed person.';

export function pairBadges({ entries, verdicts, judgedPairs, recordChanges }: BadgeDependencies): PairBadges {
  const outcomesOf = (row: PairVerdictRow): readonly CountOutcome[] => {
    const stored = verdicts.findById(row.id);
    if (stored === undefined) throw new Error(`Verdict ${row.id} is tied to a pair and not stored.`);
    const { conditions, lampCounts } = JSON.parse(stored.judgement) as StoredJudgement;
    const lowestDial = conditions.find(({ kind }) => kind === 'lowest-dial')?.position ?? null;
    // Counts of one circuit out of several that a lamp may be do not speak for the lamp.
    const others = lampCounts != null && lampCounts.circuit === null ? lampCounts.counts : [];
    const own = { count: row.lamp_count, grade: row.grade, lowestDial, verdict: row };
    return [own, ...others.filter(({ count }) => count !== row.lamp_count).map((other) => ({ ...other, verdict: row }))];
  };

  return (form, dimmerId, lampId, question) => {
    const stamp = judgedPairs.stampOf(dimmerId, lampId);
    if (stamp === undefined) return { ok: false, missing: entries.has('dimmer', dimmerId) ? 'lamp' : 'dimmer' };
    const standing = pairStanding(judgedPairs.ofPair(dimmerId, lampId, MOST_OF_PAIR), question, outcomesOf);
    const words = badgeWords(standing);
    const text = form === 'svg' ? pictureOf(standing, words) : JSON.stringify(badgeJson(dimmerId, lampId, question, standing, words));
    return { ok: true, text, holds: holdsWhile(() => judgedPairs.stampOf(dimmerId, lampId) === stamp, recordChanges) };
  };
}

/** ms for which nothing is looked up while nothing is written here: so late, at most, is what another process on the same record writes */
const TRUSTED_FOR = 1000;

/** `check`, asked again only after this process wrote anything, or a second later. */
function holdsWhile(check: () => boolean, changes: RecordChanges): () => boolean {
  let changesThen = changes();
  let checkedAt = performance.now();
  return () => {
    const [changesNow, now] = [changes(), performance.now()];
    if (changesNow === changesThen && now - checkedAt < TRUSTED_FOR) return true;
    [changesThen, checkedAt] = [changesNow, now];
    return check();
  };
}

function pictureOf(standing: PairStanding, words: BadgeWords): string {
  if (standing.kind === 'not-screened') return badgePicture('not-screened', words, CAUTION);
  const { voltage_V, frequency_Hz } = standing.mains;
  return badgePicture(standing.grade, words, `At ${voltage_V} V, ${frequency_Hz} Hz. ${CAUTION}`);
}

function badgeJson(
  dimmerId: string,
  lampId: string,
  { count }: StandingQuestion,
  standing: PairStanding,
  { label, lines, sentence }: BadgeWords,
): BadgeAnswer {
  const words = { label, lines: [...lines], sentence };
  const asked = { dimmerId, lampId, count: count ?? null };
  if (standing.kind === 'not-screened') {
    const nothing = { grade: null, counts: [], judgedCounts: [], lowestDial_pct: null, mains: null, verdicts: [] };
    return { ...asked, state: standing.outdated ? 'outdated' : 'not-screened', ...words, ...nothing, caution: CAUTION };
  }
  return {
    ...asked,
    state: 'judged',
    ...words,
    grade: standing.grade,
    counts: [...standing.counts],
    judgedCounts: [...standing.judgedCounts],
    lowestDial_pct: standing.lowestDial,
    mains: standing.mains,
    verdicts: standing.outcomes.map(({ count: of, grade, verdict }) => ({
      id: verdict.id,
      count: of,
      grade,
      modelVersion: verdict.model_version,
    })),
    caution: CAUTION,
  };
}
