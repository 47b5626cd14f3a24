/** Words for the lamps of a pairing, and for what was found out about those that were not given by their circuit. */
import type { Verdict } from '../server/schemas/verdict.ts';
import { wrap } from './terminal-text.ts';

type Load = Verdict['pairing']['lamps'][number]['lamp']['load'];
type Fit = Pick<Verdict['fits'][number], 'lamp' | 'form' | 'residual_pct'>;

const LOAD_WORDS = {
  resistive: () => 'filament or plain resistance',
  'iv-table': () => 'LED by its current curve',
  reservoir: () => 'LED with a reservoir capacitor',
  'phase-table': () => 'by its recorded current',
  class: (load: Load) => `of the class ${load.kind === 'class' ? load.class : ''}`,
} as const;

export function lampLines(lamps: Verdict['pairing']['lamps']): string[] {
  const words = lamps.map(({ count, lamp }) => {
    const power = lamp.ratedPower_W === null ? '' : `${lamp.ratedPower_W} W, `;
    return `${count} x ${power}${LOAD_WORDS[lamp.load.kind](lamp.load)}`;
  });
  return words.flatMap((line, index) => wrap(line, index === 0 ? '  Lamps   ' : '          '));
}

/** "fitted as reservoir: 4.7 uF, 32 Ohm, 8 W, residual 0.9 %" */
export function fitWords({ lamp, form, residual_pct }: Fit): string {
  const { load, input } = lamp;
  const parts =
    load.kind === 'reservoir'
      ? [
          `${round(load.capacitance_uF)} uF`,
          `${round(load.surgeResistance_Ohm + input.seriesResistance_Ohm)} Ohm`,
          ...(load.power_W === undefined ? [] : [`${round(load.power_W)} W`]),
        ]
      : load.kind === 'iv-table'
        ? [`${load.points.length} points`]
        : [];
  if (input.capacitance_nF > 0) parts.push(`${round(input.capacitance_nF)} nF across the input`);
  return `fitted as ${form}: ${parts.join(', ')}, residual ${round(residual_pct)} %`;
}

/** Fits, classes, and how each circuit is judged that the lamps may have. */
export function foundLines({ fits, lampClasses, variants }: Pick<Verdict, 'fits' | 'lampClasses' | 'variants'>): string[] {
  return [
    ...fits.flatMap((fit) => wrap(`${fit.path} ${fitWords(fit)}`, '  ')),
    ...lampClasses.flatMap(({ path, class: name, candidates, spans, ask }) => [
      ...wrap(`${path} class ${name}: ${candidates.length === 1 ? 'one circuit' : `${candidates.length} circuits`}. ${spans}`, '  '),
      ...wrap(`To narrow it, ask the maker for ${ask}.`, '  '),
    ]),
    ...variants.flatMap(({ name, grade, lowestDial_pct, shown }) => {
      const range = lowestDial_pct === null ? '' : ` from ${lowestDial_pct} %`;
      return wrap(`${name}${shown ? '; shown here' : ''}`, `  ${`${grade}${range}`.padEnd(GRADE_WIDTH)}  `);
    }),
  ];
}

const GRADE_WIDTH = 'conditional from 100 %'.length;

export const round = (value: number): number => Number(value.toPrecision(3));
