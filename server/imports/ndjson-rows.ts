/** Reads NDJSON: one value a line. A line that is not JSON is that row's fault alone, since the next line begins anew. */
import type { ImportLimits } from './import-limits.ts';
import { ListRefused } from './list-refused.ts';
import { type ListRow, rowOfJson } from './list-row.ts';

export async function* ndjsonRows(text: AsyncIterable<string>, limits: ImportLimits): AsyncGenerator<ListRow> {
  let row = 0;
  for await (const line of lines(text, limits.rowLength)) {
    row += 1;
    if (line.trim() !== '') yield rowOf(line, row);
  }
}

function rowOf(line: string, row: number): ListRow {
  try {
    return rowOfJson(line, row);
  } catch (error) {
    if (!(error instanceof SyntaxError)) throw error;
    return { row, issues: [{ path: '', message: 'is not JSON: each line holds one object' }], id: undefined };
  }
}

async function* lines(text: AsyncIterable<string>, rowLength: number): AsyncGenerator<string> {
  let open = '';
  for await (const piece of text) {
    const parts = piece.split('\n');
    const last = parts.pop() ?? '';
    for (const part of parts) {
      const line = open + part;
      open = '';
      refuseTooLong(line, rowLength);
      yield line;
    }
    open += last;
    refuseTooLong(open, rowLength);
  }
  if (open !== '') yield open;
}

function refuseTooLong(line: string, rowLength: number): void {
  if (line.length > rowLength) throw new ListRefused('list-too-large', `A line is longer than ${rowLength} characters.`);
}
