/** Reads a text file, or standard input, or says what is wrong with it in words. What the text means is the caller's. */
import { readFileSync } from 'node:fs';
import { resolve } from 'node:path';

export type TextReading =
  | { readonly ok: true; readonly name: string; readonly text: string }
  /** lines for a terminal, the first one the heading */
  | { readonly ok: false; readonly complaint: readonly string[] };

const STANDARD_INPUT = 0;

/** `what` says what the file should hold */
export function readText(source: string, what: string): TextReading {
  const name = source === '-' ? 'standard input' : source;
  const bytes = readBytes(source);
  if (typeof bytes === 'string') return { ok: false, complaint: [`cannot read ${name}: ${bytes}`] };
  const text = decode(bytes);
  if (text === null) return { ok: false, complaint: [`${name} is not text in UTF-8; save it as UTF-8`] };
  if (text.trim() === '') return { ok: false, complaint: [`${name} is empty; it should hold ${what}`] };
  return { ok: true, name, text };
}

/** the bytes, or the reason why there are none */
function readBytes(source: string): Uint8Array | string {
  try {
    return readFileSync(source === '-' ? STANDARD_INPUT : source);
  } catch (error) {
    const { code, message } = error as NodeJS.ErrnoException;
    if (code === 'ENOENT') return `there is no file ${resolve(source)}`;
    if (code === 'EISDIR') return 'it is a folder; name a file in it';
    if (code === 'EACCES') return 'its permissions do not allow it';
    if (code === undefined) throw error;
    return message;
  }
}

/** A byte order mark is skipped: some editors write one. */
function decode(bytes: Uint8Array): string | null {
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    return null;
  }
}
