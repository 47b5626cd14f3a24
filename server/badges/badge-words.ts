/** What a badge says, in words: the grade, and below it the conditions that matter. The picture and the JSON both say exactly this. */
import type { JudgedStanding, PairStanding } from './pair-standing.ts';

export interface BadgeWords {
  readonly label: string;
  /** one or two short lines */
  readonly lines: readonly string[];
  /** all of it as one sentence, for screen readers */
  readonly sentence: string;
}

const LABELS = {
  suitable: 'Suitable',
  conditional: 'Conditional',
  unsuitable: 'Unsuitable',
  undetermined: 'Undetermined',
} as const;

/** more than this make no readable line */
const MOST_PARTS = 3;

export function badgeWords(standing: PairStanding): BadgeWords {
  if (standing.kind === 'not-screened') {
    const label = 'Not screened';
    const lines = [standing.outdated ? 'Changed since judged' : 'No verdict yet'];
    return { label, lines, sentence: `${label}: ${standing.outdated ? 'dimmer or lamp changed since it was judged' : 'no verdict yet'}.` };
  }
  const label = LABELS[standing.grade];
  const counts = countsInWords(standing);
  const dial = standing.lowestDial === null ? [] : [`dial from ${standing.lowestDial} % up`];
  const spoken = standing.lowestDial === null ? [] : [`from ${standing.lowestDial} % of the dial up`];
  return { label, lines: [counts, ...dial], sentence: `${label}: ${[counts, ...spoken].join(', ')}.` };
}

function countsInWords({ counts, judgedCounts }: JudgedStanding): string {
  const parts = stretchesOf(counts).flatMap(({ from, to }) =>
    to - from < 2 ? [...new Set([from, to])].map(String) : [`${from} to ${to}`],
  );
  if (parts.length > MOST_PARTS) {
    return counts.length === judgedCounts.length
      ? `all ${counts.length} counts judged`
      : `${counts.length} of ${judgedCounts.length} counts`;
  }
  const last = parts.at(-1) ?? '';
  const words = parts.length > 1 ? `${parts.slice(0, -1).join(', ')} or ${last}` : last;
  return `${words} ${words === '1' ? 'lamp' : 'lamps'}`;
}

interface Stretch {
  readonly from: number;
  readonly to: number;
}

/** Runs of counts without a gap. */
function stretchesOf(counts: readonly number[]): readonly Stretch[] {
  const stretches: Stretch[] = [];
  for (const count of counts) {
    const last = stretches.at(-1);
    if (last !== undefined && last.to === count - 1) stretches[stretches.length - 1] = { from: last.from, to: count };
    else stretches.push({ from: count, to: count });
  }
  return stretches;
}
