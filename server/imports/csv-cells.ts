/**
 * Makes an entry of a row's cells. An empty cell is a value that is not given, never a zero. `null` says that a part is absent; tags
 * are separated by `|`; a table of points is written in one cell as pairs, `0:0 60:0 325:52`.
 */
import type { Issue } from '../schemas/wire-parsing.ts';
import type { Column } from './csv-columns.ts';
import { type DecimalStyle, quoted, readNumber } from './csv-numbers.ts';

export type CellsReading = { readonly ok: true; readonly value: object } | { readonly ok: false; readonly issues: readonly Issue[] };

type Cell = { readonly ok: true; readonly value: unknown } | { readonly ok: false; readonly message: string };

interface Branch {
  [field: string]: unknown;
}

export function readCells(cells: readonly string[], columns: readonly Column[], style: DecimalStyle, row: number): CellsReading {
  const surplus = cells.slice(columns.length).findIndex((cell) => cell.trim() !== '');
  if (cells.length < columns.length || surplus >= 0) {
    return { ok: false, issues: [{ path: '', message: `has ${cells.length} cells, where the header has ${columns.length}` }] };
  }
  const entry: Branch = {};
  const issues: Issue[] = [];
  for (const [index, column] of columns.entries()) {
    const text = cells[index]?.trim() ?? '';
    if (text === '') continue;
    const cell = readCell(text, column, style, row, () => besideOf(column, cells, columns));
    const message = cell.ok ? place(entry, column.path, cell.value) : cell.message;
    if (message !== undefined) issues.push({ path: column.path.join('.'), message });
  }
  return issues.length === 0 ? { ok: true, value: entry } : { ok: false, issues };
}

function readCell(text: string, { takes, pairs }: Column, style: DecimalStyle, row: number, kindBeside: () => string): Cell {
  if (takes.has('null') && text === 'null') return { ok: true, value: null };
  if (takes.has('list')) return { ok: true, value: text.split('|').map((tag) => tag.trim()) };
  if (takes.has('pairs')) return readPairs(text, pairs.get(kindBeside()) ?? firstOf(pairs), style, row);
  if (takes.has('number')) {
    const read = readNumber(text, style, row);
    return read.ok ? { ok: true, value: read.number } : read;
  }
  if (takes.has('text')) return { ok: true, value: text };
  return { ok: false, message: `is ${quoted(text)}; this column takes null, for a part that is absent, and nothing else` };
}

function readPairs(text: string, [x, y]: readonly [string, string], style: DecimalStyle, row: number): Cell {
  const points: Branch[] = [];
  for (const pair of text.split(/\s+/)) {
    const [first, second, ...more] = pair.split(':');
    if (first === undefined || second === undefined || more.length > 0) {
      return {
        ok: false,
        message: `holds ${quoted(pair)}, which is not a pair ${x}:${y}; pairs are separated by spaces, as 0:0 60:0 325:52`,
      };
    }
    const [one, other] = [readNumber(first, style, row), readNumber(second, style, row)];
    if (!one.ok) return { ok: false, message: `holds the pair ${quoted(pair)}; its ${x} ${one.message}` };
    if (!other.ok) return { ok: false, message: `holds the pair ${quoted(pair)}; its ${y} ${other.message}` };
    points.push({ [x]: one.number, [y]: other.number });
  }
  return { ok: true, value: points };
}

function firstOf(pairs: Column['pairs']): readonly [string, string] {
  return [...pairs.values()][0] ?? ['x', 'y'];
}

/** The cell of the `kind` that decides what a table's points are. */
function besideOf(column: Column, cells: readonly string[], columns: readonly Column[]): string {
  const kindPath = [...column.path.slice(0, -1), 'kind'].join('.');
  const index = columns.findIndex(({ path }) => path.join('.') === kindPath);
  return cells[index]?.trim() ?? '';
}

/** Sets a value in its place; says why it has none where another cell of the row has filled it with something else. */
function place(entry: Branch, path: readonly string[], value: unknown): string | undefined {
  let branch = entry;
  for (const [depth, field] of path.slice(0, -1).entries()) {
    const inner = branch[field] === undefined ? {} : branch[field];
    if (typeof inner !== 'object' || inner === null)
      return `is given together with ${path.slice(0, depth + 1).join('.')}: one or the other`;
    branch[field] = inner;
    branch = inner as Branch;
  }
  const field = path.at(-1) ?? '';
  if (branch[field] !== undefined) return 'is given together with one of its own parts: one or the other';
  branch[field] = value;
  return undefined;
}
