/** Entity tags of answers, and whether a client already has what a tag stands for (RFC 9110, 13.1.2). */
import { createHash } from 'node:crypto';

/** `header` is If-None-Match; a weak tag matches the strong one of the same text. */
export function matchesTag(header: string | undefined, tag: string): boolean {
  if (header === undefined) return false;
  if (header === tag || header.trim() === '*') return true;
  return header.split(',').some((one) => one.trim().replace(/^W\//, '') === tag);
}

/** A tag of exactly these bytes. */
export function tagOf(bytes: Buffer): string {
  return `"${createHash('sha256').update(bytes).digest('base64url').slice(0, 22)}"`;
}
