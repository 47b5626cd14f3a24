/** Runs ngspice on every known circuit and writes what it recorded to phase-tables.golden.json, for the tests that run without it. */
import { writeFileSync } from 'node:fs';
import { ngspiceVersion } from '../ngspice/run.ts';
import { dropperCircuits, reservoirCircuits, staticCircuits } from './circuits.ts';
import { deckFingerprint, frozenFile } from './frozen.ts';
import { recordWithNgspice } from './ngspice-record.ts';

const program = ngspiceVersion();
if (program === null) throw new Error('ngspice is not installed');
const records = [...staticCircuits, ...reservoirCircuits, ...dropperCircuits].map((circuit) => ({
  name: circuit.name,
  fingerprint: deckFingerprint(circuit),
  current_A: recordWithNgspice(circuit).map((p) => p.current),
}));
const made = 'by tests/profiles/freeze.ts: current at 0, 1, ... 359 degrees of the last of 16 cycles on a stiff sine, A';
writeFileSync(frozenFile, `${JSON.stringify({ program, made, records })}\n`);
