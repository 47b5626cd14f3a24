/** What ngspice recorded of the known circuits, with the fingerprint of each deck so that a changed circuit or deck cannot pass on an old record. */
import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import type { PhaseTable } from '../../model/profiles/phase-table.ts';
import type { KnownCircuit } from './circuits.ts';
import { undimmedDeck } from './ngspice-record.ts';

export const frozenFile = new URL('./phase-tables.golden.json', import.meta.url);

export function deckFingerprint(circuit: KnownCircuit): string {
  return createHash('sha256').update(undimmedDeck(circuit)).digest('hex').slice(0, 16);
}

interface Frozen {
  readonly records: readonly { readonly name: string; readonly fingerprint: string; readonly current_A: readonly number[] }[];
}

export function frozenTable(circuit: KnownCircuit): PhaseTable {
  const { records } = JSON.parse(readFileSync(frozenFile, 'utf8')) as Frozen;
  const record = records.find((r) => r.fingerprint === deckFingerprint(circuit));
  if (record === undefined) throw new Error(`no record of ${circuit.name} as it is now: run tests/profiles/freeze.ts`);
  return { ...circuit.sine, points: record.current_A.map((current, phase) => ({ phase, current })) };
}
