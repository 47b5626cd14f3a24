/** The part of a report that says what to do: what would settle the grade, how many lamps, which remedies, what dimmer. */
import type { RequirementAnswer } from '../server/schemas/requirement.ts';
import type { Verdict } from '../server/schemas/verdict.ts';
import { round } from './terminal-lamps.ts';
import { fill, wrap } from './terminal-text.ts';

export function settlingLines(found: Verdict['wouldSettle']): string[] {
  if (found === null) return [];
  if (found.kind === 'circuit') return wrap(`Ask the maker of the lamps for ${found.ask}.`, '  - ');
  const { path, what, threshold, gradeBelow, gradeAbove, corner, measure, alsoOpen, assumed } = found;
  const unit = path.slice(path.lastIndexOf('_') + 1);
  const range = `${round(threshold.low)} to ${round(threshold.high)} ${unit}`;
  const turns = `It is ${gradeBelow} below and ${gradeAbove} above ${range} (${corner}); ${round(assumed)} ${unit} was assumed.`;
  return [
    ...wrap(`Measure ${what} and give it as ${path}. ${turns}`, '  - '),
    ...wrap(measure, '  - '),
    ...(alsoOpen.length === 0 ? [] : wrap(`Open as well: ${alsoOpen.join(', ')}.`, '  - ')),
  ];
}

/** Neighbouring counts of one outcome share a line. */
export function countLines({ lampCounts: judged, wouldSettle }: Pick<Verdict, 'lampCounts' | 'wouldSettle'>): string[] {
  if (judged === null) return [];
  const assuming = wouldSettle?.kind === 'value' ? wrap(`With ${wouldSettle.what} as it was assumed.`, '  ') : [];
  const runs: { from: number; to: number; words: string }[] = [];
  for (const { count, grade, lowestDial_pct, detail } of judged.counts) {
    const words = lowestDial_pct === null ? `${grade}. ${detail}` : `${grade} from ${lowestDial_pct} %.`;
    const last = runs[runs.length - 1];
    if (last?.words === words) last.to = count;
    else runs.push({ from: count, to: count, words });
  }
  return [
    ...wrap(judged.summary, '  '),
    ...circuitLines(judged.circuit),
    ...assuming,
    ...runs.flatMap(({ from, to, words }) => wrap(words, `  ${(from === to ? `${from}` : `${from}-${to}`).padStart('500-500'.length)}  `)),
  ];
}

export function remedyLines(looked: Verdict['remedies']): string[] {
  if (looked === null) return [];
  const { found, tried, summary, circuit } = looked;
  const lines = found.length === 0 ? wrap(summary, '  - ') : found.flatMap(({ detail }) => wrap(detail, '  - '));
  const searched = tried.filter(({ candidates }) => candidates > 0).map(({ kind, candidates }) => `${kind} ${candidates}`);
  return [
    ...lines,
    ...circuitLines(circuit),
    ...(searched.length === 0 ? [] : fill(`Candidates simulated, at every corner: ${searched.join(', ')}.`.split(' '), '  ', ' ')),
  ];
}

const HEADINGS = ['latching mA', 'holding mA'] as const;

export function requirementLines(answer: RequirementAnswer | null): string[] {
  if (answer === null) return [];
  const { points, summary, circuit } = answer;
  const rows = points.map(({ latchingCurrent_mA, holdingCurrent_mA, decidedBy, cause, smallerDoes }) => {
    const beyond = decidedBy === null ? 'none seen up to 1 A' : `${cause ?? 'another state'}, at ${decidedBy}`;
    const figures = [latchingCurrent_mA, holdingCurrent_mA].map((value, k) => String(round(value)).padStart(HEADINGS[k]?.length ?? 0));
    return `  ${figures.join('  ')}  ${beyond}${smallerDoes ? '' : '; half fails too'}`;
  });
  const heading = points.length === 0 ? [] : [`  ${HEADINGS.join('  ')}  what fails beyond`];
  return [...wrap(summary, '  '), ...circuitLines(circuit), ...heading, ...rows];
}

function circuitLines(circuit: string | null): string[] {
  return circuit === null ? [] : wrap(`Simulated with the circuit that does worst: ${circuit}.`, '  ');
}
