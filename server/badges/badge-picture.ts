/**
 * A badge as an SVG picture of a fixed size: a mark, the grade in words, and one or two lines under it. The mark is two half-cycles of
 * a phase-cut mains, drawn as the grade has it; it and the colours only repeat what the words say. No script, no font and nothing else
 * from outside; light or dark as the page's reader prefers.
 */
import type { Grade } from '../../model/index.ts';
import type { BadgeWords } from './badge-words.ts';

/** px */
export const BADGE_WIDTH = 264;
export const BADGE_HEIGHT = 60;

const TEXT_LEFT = 64;
const TEXT_WIDTH = BADGE_WIDTH - TEXT_LEFT - 12;

export type BadgeMark = Grade | 'not-screened';

/** for light and for dark: at least 4.5 to 1 against the ground */
const INKS: { readonly [mark in BadgeMark]: readonly [light: string, dark: string] } = {
  suitable: ['#17663a', '#7ad69d'],
  conditional: ['#7a5200', '#eebc62'],
  unsuitable: ['#9c2420', '#ff9d94'],
  undetermined: ['#47526b', '#b4c0d6'],
  'not-screened': ['#5a6372', '#a3adbb'],
};

/** In a field of 40 x 40 around its middle line: an axis, and over and under it what the lamps are given. */
const HALF_CYCLES = 'M8 20V6.5C11 4 14 7 19 20ZM27 20V33.5C30 36 33 33 38 20Z';
const MARKS: { readonly [mark in BadgeMark]: string } = {
  suitable: `<path class="f" d="${HALF_CYCLES}"/>`,
  conditional: `<path d="${HALF_CYCLES}"/>`,
  unsuitable: '<path d="M4 20V6L9 20V6L14 20V12L17 20M22 20V34L27 20V34L32 20V28L35 20"/>',
  undetermined: '<path class="d" d="M2 20C6 1 14 1 19.5 20S33 39 38 20"/>',
  'not-screened': '',
};

export function badgePicture(mark: BadgeMark, { label, lines, sentence }: BadgeWords, description: string): string {
  const [light, dark] = INKS[mark];
  const [first, second] = lines;
  const rows =
    second === undefined
      ? [line(label, 27, 'l', LABEL_SIZE), line(first ?? '', 45, 't', LINE_SIZE)]
      : [line(label, 21, 'l', LABEL_SIZE), line(first ?? '', 37, 't', LINE_SIZE), line(second, 52, 't', LINE_SIZE)];
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${BADGE_WIDTH}" height="${BADGE_HEIGHT}" viewBox="0 0 ${BADGE_WIDTH} ${BADGE_HEIGHT}" role="img" aria-labelledby="t d">`,
    `<title id="t">${escaped(sentence)}</title><desc id="d">${escaped(description)}</desc>`,
    `<style>.g{fill:#fbfaf7;stroke:#b9b4a8}.m{fill:none;stroke:${light};stroke-width:2;stroke-linejoin:round;stroke-linecap:round}`,
    `.f{fill:${light}}.d{stroke-dasharray:3 4}.l{fill:${light};font:600 ${LABEL_SIZE}px ${FONT}}.t{fill:#2b2a27;font:${LINE_SIZE}px ${FONT}}`,
    `@media(prefers-color-scheme:dark){.g{fill:#1d1f22;stroke:#565b63}.m{stroke:${dark}}.f,.l{fill:${dark}}.t{fill:#e9e7e2}}</style>`,
    `<rect class="g" x=".5" y=".5" width="${BADGE_WIDTH - 1}" height="${BADGE_HEIGHT - 1}" rx="3"/>`,
    `<g class="m" transform="translate(12 10)"><path d="M0 20H40"/>${MARKS[mark]}</g>`,
    ...rows,
    '</svg>',
  ].join('');
}

const FONT = 'system-ui,sans-serif';
const LABEL_SIZE = 16;
const LINE_SIZE = 13;

/** em; the widest of the usual sans-serif faces, over words and figures, in bold */
const WIDEST_CHARACTER = 0.68;

/** Where a wide face could run over the edge, the text is told its length, and the browser fits it. */
function line(text: string, y: number, kind: 'l' | 't', size: number): string {
  const widest = text.length * size * WIDEST_CHARACTER;
  const fit = widest > TEXT_WIDTH ? ` textLength="${TEXT_WIDTH}" lengthAdjust="spacingAndGlyphs"` : '';
  return `<text class="${kind}" x="${TEXT_LEFT}" y="${y}"${fit}>${escaped(text)}</text>`;
}

function escaped(text: string): string {
  return text.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;');
}
