/**
 * Turns whatever was sent into a value of a zod schema, or into the list of everything that is wrong with it: each issue with its
 * path as a client would write it (`lamps[0].lamp.load.points[2].voltage_V`) and what would be right.
 */
import { z } from 'zod';

export interface Issue {
  readonly path: string;
  readonly message: string;
}

export type Parsed<T> = { readonly ok: true; readonly value: T } | { readonly ok: false; readonly issues: readonly Issue[] };

type Path = readonly PropertyKey[];
type ZodIssue = z.core.$ZodIssue;

export function parseWire<S extends z.ZodType>(schema: S, data: unknown): Parsed<z.output<S>> {
  const result = schema.safeParse(data, { error: messageOf, reportInput: true });
  if (result.success) return { ok: true, value: result.data };
  return { ok: false, issues: onceEach(result.error.issues.flatMap((issue) => flatten(issue, []))) };
}

/** Two checks of one field may say the same. */
function onceEach(issues: readonly Issue[]): readonly Issue[] {
  return [...new Map(issues.map((issue) => [JSON.stringify([issue.path, issue.message]), issue])).values()];
}

export function wirePath(path: Path): string {
  return path.map((part, index) => (typeof part === 'number' ? `[${part}]` : `${index === 0 ? '' : '.'}${String(part)}`)).join('');
}

/** Messages for issues whose schema brings none of its own. */
function messageOf(issue: z.core.$ZodRawIssue): string | undefined {
  if (issue.code === 'unrecognized_keys') return `is not a field here; the fields are ${fieldsOf(issue.inst).join(', ')}`;
  if (issue.code === 'invalid_union' && 'options' in issue && Array.isArray(issue.options)) {
    return `must be one of ${issue.options.map((option) => JSON.stringify(option)).join(', ')}`;
  }
  if (issue.code === 'invalid_value') return `must be one of ${issue.values.map((value) => JSON.stringify(value)).join(', ')}`;
  if (issue.code === 'invalid_type' && issue.expected === 'object') return `must be an object with ${fieldsOf(issue.inst).join(', ')}`;
  if (issue.code === 'invalid_type') return `must be ${/^[aeiou]/.test(issue.expected) ? 'an' : 'a'} ${issue.expected}`;
  return undefined;
}

function fieldsOf(schema: unknown): readonly string[] {
  return schema instanceof z.ZodObject ? Object.keys(schema.shape) : [];
}

function flatten(issue: ZodIssue, prefix: Path): readonly Issue[] {
  const path = [...prefix, ...issue.path];
  if (issue.code === 'unrecognized_keys') return issue.keys.map((key) => ({ path: wirePath([...path, key]), message: issue.message }));
  if (issue.code === 'invalid_union' && issue.errors.length > 0) return flattenUnion(issue, path);
  const missing = issue.code === 'invalid_type' && issue.input === undefined;
  return [{ path: wirePath(path), message: missing ? `is missing: it ${issue.message}` : issue.message }];
}

/** Of a union's branches the one that was most probably meant speaks; where none fits even by its type, all say what they take. */
function flattenUnion(issue: Extract<ZodIssue, { code: 'invalid_union' }>, path: Path): readonly Issue[] {
  const branches = issue.errors.map((issues) => ({ issues, distance: distanceOf(issues) })).sort((a, b) => a.distance - b.distance);
  const nearest = branches[0];
  if (nearest !== undefined && nearest.distance < Number.POSITIVE_INFINITY) {
    return nearest.issues.flatMap((inner) => flatten(inner, path));
  }
  const wanted = issue.errors.flatMap(([first]) => (first === undefined ? [] : [first.message.replace(/^must be /, '')]));
  const message = `must be ${wanted.join(', or ')}`;
  return [{ path: wirePath(path), message: issue.input === undefined ? `is missing: it ${message}` : message }];
}

/** how far the input is from a branch: infinite by another type, then by its own fields, foreign or missing, then by what is wrong inside them */
function distanceOf(issues: readonly ZodIssue[]): number {
  let distance = 0;
  let misses = false;
  let wrong = 0;
  for (const issue of issues) {
    if (issue.code === 'invalid_type' && issue.path.length === 0) return Number.POSITIVE_INFINITY;
    if (issue.code === 'unrecognized_keys' && issue.path.length === 0) distance += issue.keys.length;
    else if (issue.code === 'invalid_type' && issue.input === undefined && issue.path.length === 1) misses = true;
    else wrong += 1;
  }
  // Below 1: however long a list of points is, and however much is wrong in it, its branch is the one that has a place for it.
  distance += wrong / (1 + wrong);
  // However many are missing: what is empty is no nearer to the branch that needs least.
  return misses ? distance + 1 : distance;
}
