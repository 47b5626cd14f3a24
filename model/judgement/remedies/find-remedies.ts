/**
 * Looks for changes that cure a pairing that is not suitable: every one that is told was simulated at every corner. The kinds are tried
 * one by one, not in combination; a conditional cure is told only where no candidate of its kind does better.
 */
import type { Outcome } from '../../failures.ts';
import type { Pairing } from '../../pairing.ts';
import { checkOptions, checkPairing } from '../../pairing-check.ts';
import type { JudgeOptions, Remedies, Remedy } from '../../verdict.ts';
import { wouldSettle } from '../assumed/would-settle.ts';
import { EffortTally } from '../effort.ts';
import { checkJudgeExtras } from '../options-check.ts';
import { addedResistor } from './added-resistor.ts';
import { bypass } from './bypass.ts';
import { Patient } from './candidate.ts';
import { lowEndTrim } from './low-end-trim.ts';
import { moreLamps } from './more-lamps.ts';
import type { Search } from './search.ts';

const byCost = (a: Remedy, b: Remedy): number => a.power - b.power || a.parts - b.parts;

const KIND_WORDS: Record<Remedy['kind'], string> = {
  'low-end-trim': 'a raised low end of the dial',
  'added-resistor': 'an added resistor',
  bypass: 'an R-C bypass',
  'more-lamps': 'one or two more lamps',
};

function summaryOf(remedies: readonly Remedy[], tried: Remedies['tried']): string {
  const [cheapest] = remedies;
  if (cheapest !== undefined) return cheapest.detail;
  const kinds = tried.filter((t) => t.candidates > 0).map((t) => KIND_WORDS[t.kind]);
  return `No remedy was found: ${kinds.join(', ')} did not make it better (${tried.reduce((sum, t) => sum + t.candidates, 0)} candidates simulated).`;
}

function needsNone({ base, pairing, options, effort }: Patient): string {
  const open = wouldSettle(pairing, options, base, effort);
  return open === null
    ? 'It needs no remedy: suitable at every corner.'
    : `It needs no remedy with the values as they were assumed: suitable at every corner. ${open.detail}`;
}

/** candidates of one kind together */
function triedOf(searches: readonly Search[]): Remedies['tried'] {
  const kinds = [...new Set(searches.map((s) => s.kind))];
  return kinds.map((kind) => ({
    kind,
    candidates: searches.filter((s) => s.kind === kind).reduce((sum, s) => sum + s.candidates, 0),
  }));
}

/** always at every corner, whatever `options.corners` says */
export function findRemedies(pairing: Pairing, options: JudgeOptions): Outcome<Remedies> {
  const issues = [...checkPairing(pairing), ...checkOptions(options), ...checkJudgeExtras(options)];
  if (issues.length > 0) return { ok: false, failure: { kind: 'invalid-pairing', issues } };
  const effort = new EffortTally();
  const patient = new Patient(pairing, { ...options, corners: 'all' }, effort);
  const { grade } = patient.base;
  const given = { grade, remedies: [], tried: [] };
  if (grade === 'suitable') return { ok: true, value: { ...given, summary: needsNone(patient), counters: effort.total } };
  const searches = [lowEndTrim(patient), addedResistor(patient), bypass(patient), ...moreLamps(patient)];
  const remedies = searches
    .map((s) => s.remedy)
    .filter((r) => r !== null)
    .sort(byCost);
  const tried = triedOf(searches);
  return { ok: true, value: { grade, remedies, tried, summary: summaryOf(remedies, tried), counters: effort.total } };
}
