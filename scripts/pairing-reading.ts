/**
 * Reads a pairing from a file or from standard input, or says what is wrong with it: where, and what would be right. It judges nothing.
 */
import { readFileSync } from 'node:fs';
import { resolve } from 'node:path';
import { type AskedPairing, askedPairing } from '../server/schemas/pairing.ts';
import { parseWire } from '../server/schemas/wire-parsing.ts';
import { findJsonFault } from './json-fault.ts';

export type PairingReading =
  | { readonly ok: true; readonly pairing: AskedPairing }
  /** lines for a terminal, the first one the heading */
  | { readonly ok: false; readonly complaint: readonly string[] };

const STANDARD_INPUT = 0;

export function readPairing(source: string): PairingReading {
  const name = source === '-' ? 'standard input' : source;
  const bytes = readBytes(source);
  if (typeof bytes === 'string') return complain(`cannot read ${name}: ${bytes}`);
  const text = decode(bytes);
  if (text === null) return complain(`${name} is not text in UTF-8; save it as UTF-8`);
  if (text.trim() === '') return complain(`${name} is empty; it should hold a pairing as JSON`);
  try {
    return readValue(name, JSON.parse(text));
  } catch (error) {
    if (!(error instanceof SyntaxError)) throw error;
    return complain(`${name} is not JSON`, whereItBreaks(text, error));
  }
}

function readValue(name: string, value: unknown): PairingReading {
  const parsed = parseWire(askedPairing, value);
  if (parsed.ok) return { ok: true, pairing: parsed.value };
  const { issues } = parsed;
  return complain(
    `${name} is not a pairing that can be judged: ${issues.length === 1 ? 'one thing is' : `${issues.length} things are`} wrong`,
    ...issues.map(({ path, message }) => `${path === '' ? 'the pairing' : path} ${message}`),
  );
}

function complain(...complaint: string[]): PairingReading {
  return { ok: false, complaint };
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

function whereItBreaks(text: string, error: SyntaxError): string {
  const fault = findJsonFault(text);
  if (fault === null) return error.message;
  return `line ${fault.line}, column ${fault.column}: expected ${fault.expected}; found ${fault.found}`;
}
