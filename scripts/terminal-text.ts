/** Text for a terminal of 80 columns: wrapping, and colour where it is wanted. Colour only ever repeats what the words say. */

export const COLUMNS = 80;

export type Colour = 'bold' | 'dim' | 'red' | 'green' | 'yellow' | 'blue' | 'magenta' | 'cyan';

const CODES: { readonly [colour in Colour]: number } = {
  bold: 1,
  dim: 2,
  red: 31,
  green: 32,
  yellow: 33,
  blue: 34,
  magenta: 35,
  cyan: 36,
};
const ESCAPE = '\u001b[';

export type Paint = (text: string, ...colours: readonly Colour[]) => string;

export const plain: Paint = (text) => text;

export const painted: Paint = (text, ...colours) =>
  text === '' ? text : `${colours.map((colour) => `${ESCAPE}${CODES[colour]}m`).join('')}${text}${ESCAPE}0m`;

/** NO_COLOR counts when it is present and not empty (no-color.org). */
export function wantsColour(isTerminal: boolean, environment: NodeJS.ProcessEnv): boolean {
  return isTerminal && (environment.NO_COLOR ?? '') === '' && environment.TERM !== 'dumb';
}

/** Lines of at most COLUMNS: `first` leads the first one, and the rest are indented to its width. A longer word stands alone. */
export function wrap(text: string, first = ''): string[] {
  // a number keeps its percent sign
  return fill(text.split(/ (?!%)/), first, ' ');
}

/** The same for pieces that are kept whole, with a gap between two on one line. */
export function fill(pieces: readonly string[], first: string, gap: string): string[] {
  const lines: string[] = [];
  let line = first;
  let isEmpty = true;
  for (const piece of pieces) {
    if (!isEmpty && line.length + gap.length + piece.length > COLUMNS) {
      lines.push(line);
      line = ' '.repeat(first.length);
      isEmpty = true;
    }
    line += isEmpty ? piece : gap + piece;
    isEmpty = false;
  }
  return [...lines, line];
}
