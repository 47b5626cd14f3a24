/**
 * Lays a verdict out for reading in a terminal: the grade and its sentence first, then the dial, then why, then what it rests on and
 * what to mind. Nothing is computed here that the verdict does not say.
 */
import { POLARITIES, readPolarity } from '../server/schemas/polarity.ts';
import type { Verdict } from '../server/schemas/verdict.ts';
import { dialStrip } from './dial-strip.ts';
import { type Colour, fill, type Paint, wrap } from './terminal-text.ts';

const GRADE_COLOURS: { readonly [grade in Verdict['grade']]: Colour } = {
  suitable: 'green',
  conditional: 'yellow',
  unsuitable: 'red',
  undetermined: 'magenta',
};

const LOAD_WORDS = {
  resistive: 'filament or plain resistance',
  'iv-table': 'LED by its current curve',
  reservoir: 'LED with a reservoir capacitor',
} as const;

export function terminalReport(verdict: Verdict, paint: Paint): string {
  const sections = [
    [paint(verdict.grade.toUpperCase(), 'bold', GRADE_COLOURS[verdict.grade]), ...wrap(verdict.summary)],
    pairingLines(verdict.pairing),
    [...dialStrip(verdict.dial, paint), ...figureLines(verdict.dial)],
    titled('What must be seen to', itemLines(verdict.conditions.map(({ detail }) => detail)), paint),
    titled('Why', reasonLines(verdict.reasons), paint),
    titled('Corners', cornerLines(verdict.corners), paint),
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
  const lampWords = lamps.map(({ count, lamp }) => {
    const power = lamp.ratedPower_W === null ? '' : `${lamp.ratedPower_W} W, `;
    return `${count} x ${power}${LOAD_WORDS[lamp.load.kind]}`;
  });
  const currents = `latching ${currentWords(dimmer.latchingCurrent_mA)}, holding ${currentWords(dimmer.holdingCurrent_mA)}`;
  return [
    ...lampWords.flatMap((words, index) => wrap(words, index === 0 ? '  Lamps   ' : '          ')),
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

const round = (value: number): number => Number(value.toPrecision(3));

/** The range stands in a column of its own, so that the eye finds the place on the dial. */
function reasonLines(reasons: Verdict['reasons']): string[] {
  return reasons.flatMap(({ dial_pct, detail }) => wrap(detail, `  ${rangeWords(dial_pct).padEnd(RANGE_WIDTH)}  `));
}

const RANGE_WIDTH = '100-100 %'.length;

function rangeWords(range: readonly number[] | null): string {
  if (range === null) return '';
  const [from, to] = range;
  return from === to ? `${from} %` : `${from}-${to} %`;
}

/** Where one corner alone was judged, its grade is the verdict's. */
function cornerLines(corners: Verdict['corners']): string[] {
  if (corners.length < 2) return [];
  const words = corners.map(({ name, grade }, index) => `${name} ${grade}${index < corners.length - 1 ? ',' : ''}`);
  return [...fill(words, '  ', ' '), '  The worst one decides; the dial above is the nominal one.'];
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
