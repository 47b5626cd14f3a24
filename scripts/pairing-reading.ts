/**
 * Reads a pairing from a file or from standard input, or says what is wrong with it: where, and what would be right. It judges nothing.
 */
import { jsonFaultWords } from '../server/json/json-fault.ts';
import { repeatedFields } from '../server/json/repeated-fields.ts';
import { type AskedPairing, askedPairing } from '../server/schemas/pairing.ts';
import { type Issue, parseWire } from '../server/schemas/wire-parsing.ts';
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
    const value: unknown = JSON.parse(text);
    const repeated = repeatedFields(text);
    return repeated.length > 0 ? refused(name, repeated) : readValue(name, value);
  } catch (error) {
    if (!(error instanceof SyntaxError)) throw error;
    return complain(`${name} is not JSON`, jsonFaultWords(text) ?? error.message);
  }
}

function readValue(name: string, value: unknown): PairingReading {
  const parsed = parseWire(askedPairing, value);
  if (parsed.ok) return { ok: true, pairing: parsed.value };
  return refused(name, parsed.issues);
}

function refused(name: string, issues: readonly Issue[]): PairingReading {
  return complain(
    `${name} is not a pairing that can be judged: ${issues.length === 1 ? 'one thing is' : `${issues.length} things are`} wrong`,
    ...issues.map(({ path, message }) => `${path === '' ? 'the pairing' : path} ${message}`),
  );
}

function complain(...complaint: string[]): PairingReading {
  return { ok: false, complaint };
}
