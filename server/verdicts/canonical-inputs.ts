/**
 * What makes two questions the same: the judged pairing, defaults and options included, and the model version, as canonical JSON and
 * its SHA-256. The verdict's id is the head of that hash, so the same question has the same id on every installation.
 */
import { createHash } from 'node:crypto';
import type { JudgedPairing } from '../schemas/pairing.ts';

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

export function fingerprintOf(pairing: JudgedPairing, modelVersion: string): string {
  return createHash('sha256').update(canonicalJson({ modelVersion, pairing })).digest('hex');
}

export function verdictIdOf(fingerprint: string): string {
  return fingerprint.slice(0, ID_LENGTH);
}
