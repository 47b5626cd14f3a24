/**
 * How a verdict's evidence is written into one BLOB. Lists of like objects become columns, whose values resemble each other, and the
 * JSON of that is deflated with a dictionary: a typical verdict, so that names and texts which all verdicts share cost next to nothing.
 * `npm run bench:evidence` compares this with other ways.
 */
import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { deflateRawSync, inflateRawSync } from 'node:zlib';

/** JSON texts. */
export interface Evidence {
  readonly pairing: string;
  readonly assumptions: string;
  readonly judgement: string;
}

export interface WrittenEvidence {
  readonly encoding: number;
  readonly content: Buffer;
}

/** as the migration that moved the evidence wrote it */
const PLAIN_JSON = 0;
const DEFLATED_COLUMNS = 1;

/** Every stored verdict needs this very text to be read again: it is never edited. Another one would be another encoding. */
const DICTIONARY = readFileSync(new URL('./evidence-dictionary-1.txt', import.meta.url));
const DICTIONARY_SHA256 = 'bcd871c6237dc88fdf208de06bbc3ebabe3c4ce36491d9f573dfc409ac3caf43';
if (createHash('sha256').update(DICTIONARY).digest('hex') !== DICTIONARY_SHA256) {
  throw new Error('db/evidence-dictionary-1.txt was edited: stored verdicts could not be read. Restore it from the repository.');
}

/** of zlib: 9 writes 3 % less than 6, in a millisecond that a simulation of half a second does not miss */
const LEVEL = 9;

export function writeEvidence({ pairing, assumptions, judgement }: Evidence): WrittenEvidence {
  const parts = { pairing: JSON.parse(pairing), assumptions: JSON.parse(assumptions), judgement: JSON.parse(judgement) };
  const text = JSON.stringify(inColumns(parts));
  return { encoding: DEFLATED_COLUMNS, content: deflateRawSync(text, { level: LEVEL, dictionary: DICTIONARY }) };
}

export function readEvidence({ encoding, content }: WrittenEvidence): Evidence {
  const { pairing, assumptions, judgement } = partsOf(encoding, content) as { [part in keyof Evidence]: unknown };
  return { pairing: JSON.stringify(pairing), assumptions: JSON.stringify(assumptions), judgement: JSON.stringify(judgement) };
}

function partsOf(encoding: number, content: Buffer): unknown {
  if (encoding === PLAIN_JSON) return JSON.parse(content.toString('utf8'));
  if (encoding === DEFLATED_COLUMNS) return inRows(JSON.parse(inflateRawSync(content, { dictionary: DICTIONARY }).toString('utf8')));
  throw new Error(`Evidence in encoding ${encoding} is unknown to this version.`);
}

type Json = { readonly [key: string]: unknown };

/** The key under which columns stand: [[key, values], …] in the order of the rows' keys. */
const COLUMNS = '$';

/** Two or more objects with the same keys in the same order, however deep, as columns. */
export function inColumns(value: unknown): unknown {
  if (Array.isArray(value)) {
    const keys = sharedKeys(value);
    if (keys === undefined) return value.map(inColumns);
    return { [COLUMNS]: keys.map((key) => [key, inColumns(value.map((row) => row[key]))]) };
  }
  if (!isObject(value)) return value;
  if (COLUMNS in value) throw new Error(`No object of a verdict may have the key ${COLUMNS}.`);
  return mapped(value, inColumns);
}

/** The inverse of `inColumns`. */
export function inRows(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(inRows);
  if (!isObject(value)) return value;
  const columns = value[COLUMNS] as readonly (readonly [string, unknown])[] | undefined;
  if (columns === undefined) return mapped(value, inRows);
  const lists = columns.map(([key, values]) => [key, inRows(values) as readonly unknown[]] as const);
  const length = lists[0]?.[1].length ?? 0;
  return Array.from({ length }, (_, index) => Object.fromEntries(lists.map(([key, values]) => [key, values[index]])));
}

function sharedKeys(rows: readonly unknown[]): readonly string[] | undefined {
  const [first, ...others] = rows;
  if (others.length === 0 || !isObject(first)) return undefined;
  const keys = Object.keys(first);
  if (keys.length === 0 || COLUMNS in first) return undefined;
  const isAlike = (row: unknown) => {
    if (!isObject(row)) return false;
    const own = Object.keys(row);
    return own.length === keys.length && own.every((key, index) => key === keys[index]);
  };
  return others.every(isAlike) ? keys : undefined;
}

function isObject(value: unknown): value is Json {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

function mapped(value: Json, map: (inner: unknown) => unknown): Json {
  return Object.fromEntries(Object.entries(value).map(([key, inner]) => [key, map(inner)]));
}
