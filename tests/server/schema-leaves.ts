/** Walks a pairing together with its schema in the OpenAPI golden file, and gives every number with its documented range. */
import { readFileSync } from 'node:fs';
import { wirePath } from '../../server/schemas/wire-parsing.ts';
import type { Loose } from '../support/server-pairings.ts';

export interface NumberLeaf {
  readonly path: string;
  readonly minimum: number;
  readonly maximum: number;
  readonly whole: boolean;
  readonly description: string | undefined;
  readonly set: (pairing: Loose, value: unknown) => void;
}

type Keys = readonly (string | number)[];

export function numberLeaves(pairing: Loose): readonly NumberLeaf[] {
  const document = JSON.parse(readFileSync(new URL('./openapi.golden.json', import.meta.url), 'utf8'));
  return leavesOf(document.components.schemas.AskedPairing, pairing, []);
}

function leavesOf(schema: Loose, value: Loose, keys: Keys, outerDescription?: string): NumberLeaf[] {
  const description = schema.description ?? outerDescription;
  if (schema.anyOf !== undefined || schema.oneOf !== undefined) {
    return leavesOf(branchFor(schema.anyOf ?? schema.oneOf, value, keys), value, keys, description);
  }
  if (typeof value === 'number') {
    return [
      {
        path: wirePath(keys),
        minimum: schema.minimum,
        maximum: schema.maximum,
        whole: schema.type === 'integer',
        description,
        set: (pairing, changed) => {
          const parent = keys.slice(0, -1).reduce<Loose>((part, key) => part[key], pairing);
          parent[keys.at(-1) as string | number] = changed;
        },
      },
    ];
  }
  if (Array.isArray(value)) return value.flatMap((item, index) => leavesOf(schema.items, item, [...keys, index]));
  if (typeof value !== 'object' || value === null) return [];
  return Object.entries(value).flatMap(([key, inner]) => {
    const property = schema.properties?.[key];
    if (property === undefined) throw new Error(`The schema has no ${wirePath([...keys, key])}.`);
    return leavesOf(property, inner, [...keys, key]);
  });
}

function branchFor(branches: readonly Loose[], value: Loose, keys: Keys): Loose {
  const found = branches.flatMap((branch) => branch.anyOf ?? branch.oneOf ?? [branch]).find((branch) => fits(branch, value));
  if (found === undefined) throw new Error(`No branch of the schema fits ${wirePath(keys)}.`);
  return found;
}

function fits(branch: Loose, value: Loose): boolean {
  if (value === null) return branch.type === 'null';
  if (typeof value === 'number') return branch.type === 'number' || branch.type === 'integer';
  if (typeof value !== 'object' || branch.type !== 'object') return false;
  const kind = branch.properties.kind?.const;
  if (kind !== undefined) return kind === value.kind;
  return Object.keys(value).every((key) => key in branch.properties);
}
