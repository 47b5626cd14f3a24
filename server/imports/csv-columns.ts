/**
 * Which columns a CSV list may have: one for each value of an entry, named by its place with dots, without the `lamp.` or `dimmer.`
 * that all of them share. They are read from the schema that validates the entries, so that the two cannot differ.
 */
import { z } from 'zod';
import type { EntryKind } from '../../db/entries.ts';
import { dimmerEntry, lampEntry } from '../schemas/entry.ts';
import type { Issue } from '../schemas/wire-parsing.ts';

export interface Column {
  readonly path: readonly string[];
  readonly takes: ReadonlySet<'number' | 'text' | 'null' | 'list' | 'pairs'>;
  /** for a table in one cell: the two fields of its points, by the `kind` beside it */
  readonly pairs: ReadonlyMap<string, readonly [string, string]>;
}

export interface ColumnSet {
  readonly kind: EntryKind;
  readonly byName: ReadonlyMap<string, Column>;
  /** places of which some column must be there, since no row can do without */
  readonly required: readonly string[];
}

export const COLUMN_SETS: { readonly [kind in EntryKind]: ColumnSet } = {
  dimmer: columnSet('dimmer', dimmerEntry),
  lamp: columnSet('lamp', lampEntry),
};

interface JsonSchema {
  readonly $ref?: string;
  readonly $defs?: { readonly [name: string]: JsonSchema };
  readonly type?: string;
  readonly const?: unknown;
  readonly properties?: { readonly [field: string]: JsonSchema };
  readonly required?: readonly string[];
  readonly items?: JsonSchema;
  readonly anyOf?: readonly JsonSchema[];
  readonly oneOf?: readonly JsonSchema[];
}

type Growing = Map<string, { path: readonly string[]; takes: Set<string>; pairs: Map<string, readonly [string, string]> }>;

function columnSet(kind: EntryKind, schema: z.ZodType): ColumnSet {
  const document = z.toJSONSchema(schema, { io: 'input', reused: 'inline' }) as JsonSchema;
  const root = Object.values(document.$defs ?? {})[0] ?? document;
  const columns: Growing = new Map();
  grow(columns, { type: 'string' }, ['id'], kind, '');
  grow(columns, root, [], kind, '');
  const circuit = root.properties?.[kind]?.required ?? [];
  return { kind, byName: columns as ReadonlyMap<string, Column>, required: ['id', ...circuit] };
}

function grow(columns: Growing, schema: JsonSchema, path: readonly string[], kind: EntryKind, branch: string): void {
  for (const one of [...(schema.anyOf ?? []), ...(schema.oneOf ?? [])]) grow(columns, one, path, kind, branch);
  if (schema.properties !== undefined) {
    const own = schema.properties.kind?.const;
    for (const [field, inner] of Object.entries(schema.properties)) {
      grow(columns, inner, [...path, field], kind, typeof own === 'string' ? own : branch);
    }
    return;
  }
  const takes = takenBy(schema);
  if (takes === undefined) return;
  const name = columnName(path, kind);
  const column = columns.get(name) ?? { path, takes: new Set(), pairs: new Map() };
  columns.set(name, column);
  column.takes.add(takes);
  const [x, y] = Object.keys(schema.items?.properties ?? {});
  if (takes === 'pairs' && x !== undefined && y !== undefined) column.pairs.set(branch, [x, y]);
}

function takenBy({ type, items, const: only }: JsonSchema): string | undefined {
  if (type === 'array') return items?.properties === undefined ? 'list' : 'pairs';
  if (type === 'number' || type === 'integer') return 'number';
  if (type === 'null') return 'null';
  return type === 'string' || typeof only === 'string' ? 'text' : undefined;
}

function columnName(path: readonly string[], kind: EntryKind): string {
  return (path[0] === kind ? path.slice(1) : path).join('.');
}

/** For each cell of a row the column it belongs to. A header that is not all columns is refused with every name that is wrong. */
export type Header = { readonly ok: true; readonly columns: readonly Column[] } | { readonly ok: false; readonly issues: readonly Issue[] };

export function readHeader(cells: readonly string[], { kind, byName, required }: ColumnSet): Header {
  const names = withoutBlankEnd(cells).map((cell) => bareName(cell.trim(), kind));
  const issues: Issue[] = [];
  const columns = names.flatMap((name, index) => {
    const column = byName.get(name);
    if (names.indexOf(name) < index) issues.push({ path: name, message: `is the name of column ${names.indexOf(name) + 1} as well` });
    else if (column === undefined) issues.push({ path: name, message: `is not a column of a ${kind} list${nearest(name, byName)}` });
    return column === undefined ? [] : [column];
  });
  for (const place of required) {
    if (names.some((name) => name === place || name.startsWith(`${place}.`))) continue;
    issues.push({ path: place, message: 'is missing from the header: every row needs it' });
  }
  return issues.length === 0 ? { ok: true, columns } : { ok: false, issues };
}

function bareName(cell: string, kind: EntryKind): string {
  return cell.startsWith(`${kind}.`) ? cell.slice(kind.length + 1) : cell;
}

/** Spreadsheets write separators for columns that were used once. */
export function withoutBlankEnd(cells: readonly string[]): readonly string[] {
  const last = cells.findLastIndex((cell) => cell.trim() !== '');
  return cells.slice(0, last + 1);
}

function nearest(name: string, byName: ReadonlyMap<string, Column>): string {
  const plain = (text: string) => text.toLowerCase().replace(/[^a-z0-9]/g, '');
  const meant = [...byName.keys()].find((known) => plain(known) === plain(name) || plain(known.replace(/_[A-Za-z]+$/, '')) === plain(name));
  return meant === undefined ? '' : `; ${meant} is one`;
}
