/** The one plain sentence of a verdict. */
import type { Pairing, PerPolarity } from '../pairing.ts';
import type { CornerInputs, CornerName, DialRow } from '../verdict.ts';
import type { CornerGrade } from './grade.ts';
import type { JudgedCorner } from './over-corners.ts';
import { times } from './reasons.ts';

function lampWords(pairing: Pairing): { readonly who: string; readonly many: boolean } {
  const count = pairing.lamps.reduce((sum, g) => sum + g.count, 0);
  if (count === 1) return { who: 'One lamp', many: false };
  return { who: pairing.lamps.length > 1 ? `These ${count} lamps` : `${count} lamps`, many: true };
}

export function summarize(pairing: Pairing, dial: readonly DialRow[], judged: CornerGrade): string {
  const { who, many } = lampWords(pairing);
  const runs = many ? 'run' : 'runs';
  const rating = judged.reasons.find((r) => r.code.endsWith('-rating'));
  if (rating !== undefined) return rating.detail;
  if (judged.grade === 'suitable') {
    const dark = dial.some((r) => r.state === 'dark');
    const lit = judged.popOn.litFrom;
    return dark && lit !== null
      ? `${who} ${runs} steadily on this dimmer wherever ${many ? 'they are' : 'it is'} lit (from ${lit} % of the dial up).`
      : `${who} ${runs} steadily on this dimmer over the whole dial.`;
  }
  const lowest = judged.conditions.find((c) => c.kind === 'lowest-dial');
  if (lowest !== undefined) {
    return `${who} ${runs} steadily on this dimmer from ${lowest.position} % of the dial up, not below.`;
  }
  if (judged.grade === 'undetermined') {
    const why = judged.reasons.find((r) => r.code === 'undecided')?.detail ?? '';
    return `Whether ${who.toLowerCase()} ${runs} steadily on this dimmer could not be decided. ${why}`.trim();
  }
  if (dial.every((r) => r.state === 'dark')) return `${who} ${many ? 'stay' : 'stays'} dark on this dimmer at every dial position.`;
  const refiring = dial.filter((r) => r.firings.max >= 2);
  const busiest = Math.max(0, ...refiring.map((r) => r.firings.max));
  if (refiring.some((r) => r.state === 're-firing' || r.state === 'skipping')) {
    return `${who} ${many ? 'do' : 'does'} not run steadily on this dimmer: the triac drops out and fires up to ${times(busiest, busiest)} in a half-cycle.`;
  }
  const worst = judged.reasons.find((r) => r.code !== 'pop-on' && r.code !== 'dark-low-on-dial');
  return `${who} ${many ? 'do' : 'does'} not run steadily on this dimmer.${worst === undefined ? '' : ` ${worst.detail}`}`;
}

const CORNER_WORDS: Record<CornerName, string> = {
  nominal: 'nominal mains',
  'low-mains-cold': 'low mains, switched on cold',
  'high-mains-cold': 'high mains, switched on cold',
  'typical-currents': 'typical latching and holding currents',
};

const inRange = (p: PerPolarity): string => {
  const [low, high] = [p.positive, p.negative].sort((a, b) => a - b).map((a) => Number((1e3 * a).toPrecision(3)));
  return low === high ? `${low} mA` : `${low} and ${high} mA`;
};

/** "low mains, switched on cold (207 V, latching 60 mA, holding 36 mA)" */
export function cornerInWords({ name, mainsVoltage, latchingCurrent, holdingCurrent }: CornerInputs): string {
  const volts = Number(mainsVoltage.toPrecision(3));
  return `${CORNER_WORDS[name]} (${volts} V, latching ${inRange(latchingCurrent)}, holding ${inRange(holdingCurrent)})`;
}

/** the sentence where another corner than the nominal one decides */
export function summarizeCorner(
  pairing: Pairing,
  dial: readonly DialRow[],
  nominal: CornerGrade,
  { corner, rows, graded }: JudgedCorner,
): string {
  const { who, many } = lampWords(pairing);
  const where = cornerInWords(corner);
  const lowest = graded.conditions[0];
  if (lowest !== undefined) {
    return `${who} ${many ? 'run' : 'runs'} steadily on this dimmer from ${lowest.position} % of the dial up; below, ${many ? 'they do' : 'it does'} not at ${where}.`;
  }
  return `${summarize(pairing, dial, nominal)} Not so at ${where}: ${summarize(pairing, rows, graded)}`;
}
