/**
 * Reads a pairing from a file or from standard input, or says what is wrong with it: where, and what would be right. It judges nothing.
 */
import { type AskedPairing, askedPairing } from '../server/schemas/pairing.ts';
import { parseWire } from '../server/schemas/wire-parsing.ts';
import { findJsonFault } from './json-fault.ts';
import { readText } from './text-reading.ts';

export type PairingReading =
  | { readonly ok: true; readonly pairing: AskedPairing }
  /** lines for a terminal, the first one the heading */
  | { readonly ok: false; readonly complaint: readonly string[] };

export function readPairing(source: string): PairingReading {
  const file = readText(source, 'a pairing as JSON');
  if (!file.ok) return file;
  const { name, text } = file;
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

function whereItBreaks(text: string, error: SyntaxError): string {
  const fault = findJsonFault(text);
  if (fault === null) return error.message;
  return `line ${fault.line}, column ${fault.column}: expected ${fault.expected}; found ${fault.found}`;
}
