/**
 * What makes two questions the same: the judged pairing, defaults and options included, which of its values were assumed, and the model
 * version, as canonical JSON and its SHA-256. What was assumed counts because a grade that hinges on an assumed value is undetermined. The
 * verdict's id is the head of that hash, so the same question has the same id on every installation.
 */
import { createHash } from 'node:crypto';
import type { Completion } from './pairing-completion.ts';

/** 104 bits: with a million verdicts, two share an id with a probability below 1e-19. */
const ID_LENGTH = 26;

/** JSON with the keys of every object sorted by code unit and no spaces. */
export function canonicalJson(value: unknown): string {
  return JSON.stringify(value, (_, inner: unknown) =>
    typeof inner === 'object' && inner !== null && !Array.isArray(inner)
      ? Object.fromEntries(Object.entries(inner).sort(([a], [b]) => (a < b ? -1 : 1)))
      : inner,
  );
}

export function fingerprintOf({ pairing, assumptions }: Completion, modelVersion: string): string {
  const assumed = assumptions.map(({ path }) => path).sort();
  return createHash('sha256').update(canonicalJson({ assumed, modelVersion, pairing })).digest('hex');
}

export function verdictIdOf(fingerprint: string): string {
  return fingerprint.slice(0, ID_LENGTH);
}
