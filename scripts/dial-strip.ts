/**
 * Draws the dial as strips of characters, one for the way up and one for the way down, with a ruler of dial positions above and a
 * legend below. One character stands for one state, whatever the colour.
 */
import type { Verdict } from '../server/schemas/verdict.ts';
import { COLUMNS, type Colour, fill, type Paint } from './terminal-text.ts';

type DialRow = Verdict['dial'][number];
type DialState = DialRow['state'];

interface Mark {
  readonly character: string;
  readonly meaning: string;
  readonly colour: Colour;
}

/** in the order of the legend */
const MARKS: { readonly [state in DialState]: Mark } = {
  steady: { character: '=', meaning: 'steady', colour: 'green' },
  dark: { character: '.', meaning: 'dark', colour: 'dim' },
  skipping: { character: 'S', meaning: 'skips half-cycles: flicker', colour: 'red' },
  're-firing': { character: 'R', meaning: 're-fires: hum, heat', colour: 'red' },
  'dropping-out': { character: 'D', meaning: 'drops out: light lost', colour: 'yellow' },
  lopsided: { character: 'L', meaning: 'lopsided: flicker', colour: 'magenta' },
  wandering: { character: 'W', meaning: 'wanders: flicker', colour: 'magenta' },
  undecided: { character: '?', meaning: 'undecided', colour: 'cyan' },
};

const LABELS = { ruler: '  Dial %  ', up: '  up      ', down: '  down    ' };
/** the last position's number may stand out by two digits beyond its cell */
const ROOM = COLUMNS - LABELS.ruler.length - 2;
const WIDEST_CELL = 3;

export function dialStrip(dial: readonly DialRow[], paint: Paint): string[] {
  const states = new Map(dial.map(({ sweep, position_pct, state }) => [`${sweep} ${position_pct}`, state]));
  const positions = [...new Set(dial.map((row) => row.position_pct))].sort((a, b) => a - b);
  const sweeps = (['up', 'down'] as const).filter((sweep) => dial.some((row) => row.sweep === sweep));

  const blocks = Math.ceil(positions.length / ROOM);
  const length = Math.ceil(positions.length / blocks);
  const cell = Math.min(WIDEST_CELL, Math.floor(ROOM / length));
  const lines: string[] = [];
  for (let from = 0; from < positions.length; from += length) {
    const shown = positions.slice(from, from + length);
    lines.push(LABELS.ruler + ruler(shown, cell));
    for (const sweep of sweeps) {
      const marks = shown.map((position) => MARKS[states.get(`${sweep} ${position}`) ?? 'undecided']);
      lines.push(LABELS[sweep] + marks.map(({ character, colour }) => paint(character.repeat(cell), colour)).join(''));
    }
  }
  return [...lines, ...legend(new Set(dial.map((row) => row.state)))];
}

/** About five positions by number, each over the first character of its cell, where they do not run into each other. */
function ruler(positions: readonly number[], cell: number): string {
  const quarters = [0, 1, 2, 3, 4].map((quarter) => Math.round((quarter * (positions.length - 1)) / 4));
  let line = '';
  for (const index of new Set(quarters)) {
    const at = index * cell;
    if (line === '' || at > line.length) line = line.padEnd(at) + String(positions[index] ?? '');
  }
  return line;
}

function legend(states: ReadonlySet<DialState>): string[] {
  const shown = Object.entries(MARKS).filter(([state]) => states.has(state as DialState));
  return fill(
    shown.map(([, { character, meaning }]) => `${character} ${meaning}`),
    ' '.repeat(LABELS.ruler.length),
    '   ',
  );
}
