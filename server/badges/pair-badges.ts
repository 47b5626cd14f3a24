/**
 * The badges of pairs, ready to be sent. A badge is made once and kept with the stamp of what it was made from: the circuits of both
 * entries and their last tie. Every request looks the stamp up anew, so that no write has to know of badges, and none is missed.
 */
import type { EntryStore } from '../../db/entries.ts';
import type { JudgedPairs, PairVerdictRow } from '../../db/judged-pairs.ts';
import type { VerdictStore } from '../../db/verdicts.ts';
import type { Judgement } from '../../model/index.ts';
import { MOST_OF_PAIR } from '../catalogue/pair-verdicts.ts';
import { type Answer, answerOf, keepingAnswers } from '../kept-answers.ts';
import type { BadgeAnswer } from '../schemas/badge-calls.ts';
import { badgePicture } from './badge-picture.ts';
import { type BadgeWords, badgeWords } from './badge-words.ts';
import { type PairStanding, pairStanding, type StandingQuestion } from './pair-standing.ts';

export type BadgeForm = 'svg' | 'json';

export interface BadgeDependencies {
  readonly entries: EntryStore;
  readonly verdicts: VerdictStore;
  readonly judgedPairs: JudgedPairs;
}

export type PairBadge = { readonly ok: true; readonly answer: Answer } | { readonly ok: false; readonly missing: 'dimmer' | 'lamp' };

/** `question` is what the query of the address says, by which badges of a pair are told apart. */
export type PairBadges = (form: BadgeForm, dimmerId: string, lampId: string, question: StandingQuestion) => PairBadge;

/** bytes: some tens of thousands of badges */
const MOST_BYTES = 48 * 1024 * 1024;

interface StampedAnswer extends Answer {
  readonly stamp: string;
}

const CAUTION = 'A screening by simulation, not a type test. Follow both makers’ instructions; work on the mains is for a licensed person.';

export function pairBadges({ entries, verdicts, judgedPairs }: BadgeDependencies): PairBadges {
  const kept = keepingAnswers<StampedAnswer>(MOST_BYTES);

  const lowestDialOf = ({ id }: PairVerdictRow): number | null => {
    const judgement = verdicts.findById(id)?.judgement;
    if (judgement === undefined) return null;
    const { conditions } = JSON.parse(judgement) as Judgement;
    return conditions.find(({ kind }) => kind === 'lowest-dial')?.position ?? null;
  };

  return (form, dimmerId, lampId, question) => {
    const stamp = judgedPairs.stampOf(dimmerId, lampId);
    if (stamp === undefined) return { ok: false, missing: entries.has('dimmer', dimmerId) ? 'lamp' : 'dimmer' };
    const { count, mains } = question;
    const key = `${form} ${dimmerId} ${lampId} ${count} ${mains?.voltage_V} ${mains?.frequency_Hz}`;
    const ready = kept.get(key);
    if (ready?.stamp === stamp) return { ok: true, answer: ready };

    const standing = pairStanding(judgedPairs.ofPair(dimmerId, lampId, MOST_OF_PAIR), question, lowestDialOf);
    const words = badgeWords(standing);
    const text = form === 'svg' ? pictureOf(standing, words) : JSON.stringify(badgeJson(dimmerId, lampId, question, standing, words));
    const answer = { ...answerOf(text), stamp };
    kept.keep(key, answer);
    return { ok: true, answer };
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
    verdicts: standing.verdicts.map(({ id, lamp_count, grade, model_version }) => ({
      id,
      count: lamp_count,
      grade,
      modelVersion: model_version,
    })),
    caution: CAUTION,
  };
}
