/**
 * Reads a CSV list row by row: finds out how it is separated, checks the header before it reads on, and hands each row over as an
 * entry that is still to be checked. What breaks the rules of CSV (a quote that never closes) breaks the list, since nobody can say
 * where the next row begins.
 */
import { pipeline, Readable } from 'node:stream';
import { CsvError, type Parser, parse } from 'csv-parse';
import type { EntryKind } from '../../db/entries.ts';
import { readCells } from './csv-cells.ts';
import { COLUMN_SETS, type Column, readHeader } from './csv-columns.ts';
import type { DecimalMark, DecimalStyle } from './csv-numbers.ts';
import { csvStart } from './csv-start.ts';
import type { ImportLimits } from './import-limits.ts';
import { ListRefused } from './list-refused.ts';
import type { ListRow } from './list-row.ts';

export async function* csvRows(
  text: AsyncIterable<string>,
  kind: EntryKind,
  limits: ImportLimits,
  decimal: DecimalMark | undefined,
): AsyncGenerator<ListRow> {
  const { separator, rowsBefore, text: rest } = await csvStart(text, limits.rowLength);
  const style = decimalStyle(decimal, separator);
  let row = rowsBefore;
  let columns: readonly Column[] | undefined;
  for await (const cells of csvRecords(rest, separator, limits.rowLength)) {
    row += 1;
    if (cells.every((cell) => cell.trim() === '')) continue;
    if (columns === undefined) {
      columns = columnsOf(cells, kind);
      continue;
    }
    const read = readCells(cells, columns, style, row);
    // The part that all columns but the texts lie in is there even where all of them are empty, so that what is missing is named.
    yield read.ok ? { row, value: { [kind]: {}, ...read.value } } : { row, issues: read.issues, id: idOf(cells, columns) };
  }
  if (columns === undefined) throw new ListRefused('unreadable-list', 'The list is empty: its first row must name the columns.');
}

/** Commas between cells leave the point for the decimals; other separators are what a decimal comma makes a spreadsheet use. */
function decimalStyle(stated: DecimalMark | undefined, separator: string): DecimalStyle {
  if (stated !== undefined) return { mark: stated, from: `decimal=${stated} in the address` };
  if (separator === ',') return { mark: 'point', from: 'as commas separate the cells; say decimal=comma in the address if it is not so' };
  return { mark: undefined, from: '' };
}

function columnsOf(cells: readonly string[], kind: EntryKind): readonly Column[] {
  const header = readHeader(cells, COLUMN_SETS[kind]);
  if (!header.ok) throw new ListRefused('invalid-request', 'The header is not one of this list. Nothing was read.', header.issues);
  return header.columns;
}

function idOf(cells: readonly string[], columns: readonly Column[]): string | undefined {
  const id = cells[columns.findIndex(({ path }) => path.length === 1 && path[0] === 'id')]?.trim();
  return id === '' ? undefined : id;
}

async function* csvRecords(text: AsyncIterable<string>, separator: string, rowLength: number): AsyncGenerator<readonly string[]> {
  const parser = parse({ delimiter: separator, relax_column_count: true, skip_empty_lines: false, max_record_size: rowLength });
  try {
    // The callback is what keeps a failing source from being an uncaught error; the iteration below throws it.
    yield* pipeline(Readable.from(text), parser, () => undefined) as Parser as AsyncIterable<readonly string[]>;
  } catch (error) {
    if (!(error instanceof CsvError)) throw error;
    if (error.code === 'CSV_MAX_RECORD_SIZE') {
      throw new ListRefused('list-too-large', `A row that ends after line ${parser.info.lines} is longer than ${rowLength} characters.`);
    }
    throw new ListRefused('unreadable-list', `The list breaks the rules of CSV near line ${parser.info.lines}: ${ruleBroken(error.code)}.`);
  }
}

function ruleBroken(code: string): string {
  switch (code) {
    case 'CSV_QUOTE_NOT_CLOSED':
      return 'a quote is opened and never closed';
    case 'INVALID_OPENING_QUOTE':
    case 'CSV_INVALID_CLOSING_QUOTE':
      return 'a quote stands inside a cell; put the whole cell in quotes and double the quote inside';
    default:
      return 'the cells cannot be told apart';
  }
}
