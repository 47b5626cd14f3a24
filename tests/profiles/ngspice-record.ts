/** Records a lamp's undimmed current with ngspice: a stiff sine, the lamp's deck, the last full cycle read off at every degree. */
import { spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { PhasePoint } from '../../model/profiles/phase-table.ts';
import { number } from '../ngspice/deck-element.ts';
import { lampGroup } from '../ngspice/deck-lamp.ts';
import { readRaw } from '../ngspice/raw-file.ts';
import type { KnownCircuit } from './circuits.ts';

const CYCLES = 16;

/** what ngspice reads */
export function undimmedDeck({ sine, lamp }: KnownCircuit): string {
  const end = CYCLES / sine.frequency;
  return [
    'a lamp on undimmed mains',
    `vmains live 0 sin(0 ${number(Math.SQRT2 * sine.voltage)} ${number(sine.frequency)})`,
    'vlamp live lamp 0',
    ...lampGroup({ count: 1, lamp }, 0, 'lamp'),
    '.options method=gear maxord=2 trtol=1 reltol=1e-4 vntol=1e-6 abstol=1e-9 chgtol=1e-11 itl4=60 gmin=1e-15',
    '.save i(vlamp)',
    `.tran 5u ${number(end)} ${number(end - 1.1 / sine.frequency)} 5u`,
    '.end',
    '',
  ].join('\n');
}

export function recordWithNgspice(circuit: KnownCircuit): PhasePoint[] {
  const folder = mkdtempSync(join(tmpdir(), 'ngspice-'));
  try {
    const netlist = join(folder, 'deck.cir');
    const raw = join(folder, 'out.raw');
    writeFileSync(netlist, undimmedDeck(circuit));
    const { status, stderr } = spawnSync('ngspice', ['-b', '-r', raw, netlist], { encoding: 'utf8', timeout: 60_000 });
    if (status !== 0) throw new Error(`ngspice ended with ${status}: ${stderr.slice(-2000)}`);
    const { columns, rows } = readRaw(readFileSync(raw));
    const time = columns.get('time') as Float64Array;
    const current = columns.get('i(vlamp)') as Float64Array;
    const start = (CYCLES - 1) / circuit.sine.frequency;
    let k = 0;
    return Array.from({ length: 360 }, (_, phase) => {
      const at = start + phase / (360 * circuit.sine.frequency);
      while (k < rows - 2 && (time[k + 1] as number) < at) k++;
      const [t0, t1, i0, i1] = [time[k], time[k + 1], current[k], current[k + 1]] as [number, number, number, number];
      return { phase, current: Number((i0 + ((i1 - i0) * (at - t0)) / (t1 - t0)).toPrecision(6)) };
    });
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
