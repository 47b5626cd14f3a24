/**
 * Lays a verdict out for reading in a terminal: the grade and its sentence first, then the dial, then why, then what it rests on and
 * what to mind. Nothing is computed here that the verdict does not say.
 */
import { POLARITIES, readPolarity } from '../server/schemas/polarity.ts';
import type { RequirementAnswer } from '../server/schemas/requirement.ts';
import type { Verdict } from '../server/schemas/verdict.ts';
import { dialStrip } from './dial-strip.ts';
import { countLines, remedyLines, requirementLines, settlingLines } from './terminal-advice.ts';
import { foundLines, lampLines, round } from './terminal-lamps.ts';
import { type Colour, fill, type Paint, wrap } from './terminal-text.ts';

const GRADE_COLOURS: { readonly [grade in Verdict['grade']]: Colour } = {
  suitable: 'green',
  conditional: 'yellow',
  unsuitable: 'red',
  undetermined: 'magenta',
};

export function terminalReport(verdict: Verdict, paint: Paint, requirement: RequirementAnswer | null = null): string {
  const sections = [
    [paint(verdict.grade.toUpperCase(), 'bold', GRADE_COLOURS[verdict.grade]), ...wrap(verdict.summary)],
    pairingLines(verdict.pairing),
    [...dialStrip(verdict.dial, paint), ...figureLines(verdict.dial), ...edgeLines(verdict.dial), ...whoseLines(verdict)],
    titled('What must be seen to', itemLines(verdict.conditions.map(({ detail }) => detail)), paint),
    titled('What would settle it', settlingLines(verdict.wouldSettle), paint),
    titled('Remedies', remedyLines(verdict.remedies), paint),
    titled(countTitle(verdict), countLines(verdict), paint),
    titled('What dimmer would do', requirementLines(requirement), paint),
    titled('Why', reasonLines(verdict.reasons), paint),
    titled('Corners', cornerLines(verdict), paint),
    titled('Lamps that are not known by their circuit', foundLines(verdict), paint),
    titled('Assumed, since the file does not say (--json gives the basis of each)', assumptionLines(verdict.assumptions), paint),
    titled('Mind', itemLines(verdict.cautions), paint),
    [paint(`Verdict ${verdict.id}, model version ${verdict.modelVersion}`, 'dim')],
  ];
  const shown = sections.filter((lines) => lines.length > 0);
  return `${shown.map((lines) => lines.join('\n')).join('\n\n')}\n`;
}

function titled(title: string, lines: readonly string[], paint: Paint): readonly string[] {
  return lines.length === 0 ? [] : [paint(title, 'bold'), ...lines];
}

function itemLines(texts: readonly string[]): string[] {
  return texts.flatMap((text) => wrap(text, '  - '));
}

function pairingLines({ mains, dimmer, lamps, addedLoad }: Verdict['pairing']): string[] {
  const currents = `latching ${currentWords(dimmer.latchingCurrent_mA)}, holding ${currentWords(dimmer.holdingCurrent_mA)}`;
  return [
    ...lampLines(lamps),
    ...(addedLoad === null ? [] : wrap(addedLoadWords(addedLoad), '  Added   ')),
    ...wrap(`${currents}, ${dimmer.wiring}, ${dimmer.drive.kind} drive`, '  Dimmer  '),
    ...wrap(`${mains.voltage_V} V, ${mains.frequency_Hz} Hz`, '  Mains   '),
  ];
}

/** stated maximum, once where both polarities have the same */
function currentWords(current: Verdict['pairing']['dimmer']['latchingCurrent_mA']): string {
  const maxima = POLARITIES.map((polarity) => readPolarity(current, polarity)?.maximum);
  return `${[...new Set(maxima)].join('/')} mA`;
}

function addedLoadWords(load: NonNullable<Verdict['pairing']['addedLoad']>): string {
  return load.kind === 'resistor'
    ? `a resistor of ${load.resistance_kOhm} kOhm across the lamps`
    : `${load.resistance_Ohm} Ohm and ${load.capacitance_nF} nF in series across the lamps`;
}

function figureLines(dial: Verdict['dial']): string[] {
  const brightest = dial.reduce<Verdict['dial'][number] | undefined>(
    (best, row) => (best === undefined || row.position_pct > best.position_pct ? row : best),
    undefined,
  );
  if (brightest === undefined) return [];
  const most = (pick: (row: Verdict['dial'][number]) => number): number => Math.max(...dial.map(pick));
  const text = `${round(brightest.lampPower_W)} W in the lamps at ${brightest.position_pct} %; the dimmer carries at most ${round(
    most((row) => row.rmsCurrent_mA),
  )} mA r.m.s. and peaks of ${round(most((row) => row.peakCurrent_A))} A.`;
  return ['', ...wrap(text, '  ')];
}

/** %; a margin below this would be read as none */
const LEAST_SHOWN = 0.01;

/** Where a part a hair different would do something else, and how little that is. */
function edgeLines(dial: Verdict['dial']): string[] {
  const near = dial.filter((row) => row.nearEdge);
  if (near.length === 0) return [];
  const positions = [...new Set(near.map((row) => row.position_pct))].sort((a, b) => a - b);
  const margins = near.flatMap(({ margins: { latching_pct, holding_pct, breakover_pct } }) => [latching_pct, holding_pct, breakover_pct]);
  const least = Math.min(...margins.filter((margin) => margin !== null));
  const part = least < LEAST_SHOWN ? 'the slightest difference in a part' : `a part ${round(least)} % different`;
  const text = `Near the edge at ${positions.join(', ')} %: ${part} would do something else there.`;
  return wrap(text, '  ');
}

/** Of several corners the dial is the nominal one's, of several possible circuits it is one's: said where another decides. */
function whoseLines({ variants, decidedBy, pairing }: Verdict): string[] {
  const one = variants.find(({ shown }) => shown);
  const corner = `The dial here is the one at ${pairing.mains.voltage_V} V; it is worse at ${decidedBy}, see Corners.`;
  return [
    ...(decidedBy === 'nominal' ? [] : wrap(corner, '  ')),
    ...(variants.length < 2 || one === undefined ? [] : wrap(`The lamps here have the circuit that does worst: ${one.name}.`, '  ')),
  ];
}

function countTitle({ lampCounts, pairing }: Verdict): string {
  const others = pairing.lamps.length > 1 ? ` (of lamps[${lampCounts?.group}]; the others stay)` : '';
  return `How many lamps${others}`;
}

/** The range stands in a column of its own, so that the eye finds the place on the dial. */
function reasonLines(reasons: Verdict['reasons']): string[] {
  return reasons.flatMap(({ dial_pct, detail, corner }) => {
    const where = corner === 'nominal' ? '' : ` (${corner})`;
    return wrap(`${detail}${where}`, `  ${rangeWords(dial_pct).padEnd(RANGE_WIDTH)}  `);
  });
}

const RANGE_WIDTH = '100-100 %'.length;

function rangeWords(range: readonly number[] | null): string {
  if (range === null) return '';
  const [from, to] = range;
  return from === to ? `${from} %` : `${from}-${to} %`;
}

/** Where one corner alone was judged, its grade is the verdict's. */
function cornerLines({ corners, sparedCorners, decidedBy }: Verdict): string[] {
  if (corners.length + sparedCorners.length < 2) return [];
  const rows = corners.map(({ name, mainsVoltage_V, latchingCurrent_mA, holdingCurrent_mA, grade, lowestDial_pct }) => {
    const inputs = `${round(mainsVoltage_V)} V, latching ${bothWords(latchingCurrent_mA)}, holding ${bothWords(holdingCurrent_mA)}`;
    const range = lowestDial_pct === null ? '' : ` from ${lowestDial_pct} %`;
    return wrap(`${inputs}: ${grade}${range}`, `  ${name.padEnd(CORNER_WIDTH)}  `);
  });
  const spared = sparedCorners.map((name) => `  ${name.padEnd(CORNER_WIDTH)}  not needed: the grade was decided`);
  return [...rows.flat(), ...spared, `  Decided by ${decidedBy}; the dial above is the nominal one.`];
}

const CORNER_WIDTH = 'typical-currents'.length;

function bothWords({ positive, negative }: Verdict['corners'][number]['latchingCurrent_mA']): string {
  return `${[...new Set([round(positive), round(negative)])].join('/')} mA`;
}

/** By the part they belong to, under the names by which the file can give them. */
function assumptionLines(assumptions: Verdict['assumptions']): string[] {
  const parts = new Map<string, string[]>();
  for (const { path, value } of assumptions) {
    const cut = path.lastIndexOf('.');
    const part = path.slice(0, cut);
    const values = parts.get(part) ?? [];
    values.push(`${path.slice(cut + 1)} ${valueWords(value)}`);
    parts.set(part, values);
  }
  return [...parts].flatMap(([part, values]) => [
    `  ${part === 'model' ? 'model (no field changes these)' : part}`,
    ...fill(values.map(withComma), '    ', ' '),
  ]);
}

const withComma = (text: string, index: number, all: readonly string[]): string => (index < all.length - 1 ? `${text},` : text);

function valueWords(value: Verdict['assumptions'][number]['value']): string {
  if (value === null) return 'none';
  if (!Array.isArray(value)) return String(value);
  return `${value[0]} to ${value[value.length - 1]} (${value.length} values)`;
}
