/**
 * Finds out from the first line of a CSV list what separates its cells: commas, semicolons (where the comma is the decimal mark) or
 * tabs. Some spreadsheets say so themselves in a line before the header, `sep=;`.
 */
import { ListRefused } from './list-refused.ts';

export interface CsvStart {
  readonly separator: string;
  /** lines that were taken away in front of the header */
  readonly rowsBefore: number;
  /** the list from the header on */
  readonly text: AsyncIterable<string>;
}

const SAID = /^sep=([,;\t])\r?\n/;

export async function csvStart(text: AsyncIterable<string>, rowLength: number): Promise<CsvStart> {
  const pieces = text[Symbol.asyncIterator]();
  let head = '';
  for (let piece = await pieces.next(); !piece.done; piece = await pieces.next()) {
    head += piece.value;
    if (firstLineEnd(head.trimStart()) >= 0) break;
    if (head.length > rowLength) throw new ListRefused('list-too-large', `The first row is longer than ${rowLength} characters.`);
  }
  const said = SAID.exec(head);
  const separator = said?.[1] ?? separatorOf(head.trimStart());
  const rest = said === null ? head : head.slice(said[0].length);
  return { separator, rowsBefore: said === null ? 0 : 1, text: joined(rest, pieces) };
}

function firstLineEnd(text: string): number {
  return text.search(/[\r\n]/);
}

/** Column names hold none of the three, so the one that comes first is it. A list of one column has none: any will do. */
function separatorOf(head: string): string {
  const end = firstLineEnd(head);
  const line = end < 0 ? head : head.slice(0, end);
  return /[,;\t]/.exec(line)?.[0] ?? ',';
}

async function* joined(head: string, pieces: AsyncIterator<string>): AsyncGenerator<string> {
  try {
    yield head;
    for (let piece = await pieces.next(); !piece.done; piece = await pieces.next()) yield piece.value;
  } finally {
    await pieces.return?.();
  }
}
