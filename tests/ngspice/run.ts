/** Runs ngspice on a deck within a time limit and reads the result into half-cycle records. Leaves nothing behind in the temporary folder. */
import { spawn, spawnSync } from 'node:child_process';
import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Pairing } from '../../model/pairing.ts';
import { type DeckTolerances, deck, ordinaryTolerances } from './deck.ts';
import { type ReferenceHalfCycle, readHalfCycles } from './half-cycles.ts';
import { readRaw } from './raw-file.ts';

export interface RunOptions {
  readonly halfCycles: number;
  readonly tolerances?: DeckTolerances;
  /** s of wall clock */
  readonly timeLimit?: number;
}

/** The program's version line, or null where it is not installed. */
export function ngspiceVersion(): string | null {
  const { stdout } = spawnSync('ngspice', ['--version'], { encoding: 'utf8', timeout: 10_000 });
  return /ngspice-\d+/.exec(stdout ?? '')?.[0] ?? null;
}

export async function runNgspice(pairing: Pairing, dial: number, options: RunOptions): Promise<ReferenceHalfCycle[]> {
  const folder = await mkdtemp(join(tmpdir(), 'ngspice-'));
  try {
    const netlist = join(folder, 'deck.cir');
    const raw = join(folder, 'out.raw');
    await writeFile(netlist, deck(pairing, dial, options.halfCycles, options.tolerances ?? ordinaryTolerances));
    await simulate(['-b', '-r', raw, netlist], options.timeLimit ?? 300);
    return readHalfCycles(readRaw(await readFile(raw)), pairing.mains.frequency, options.halfCycles);
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
}

function simulate(args: readonly string[], timeLimit: number): Promise<void> {
  return new Promise((resolve, reject) => {
    const child = spawn('ngspice', args, { stdio: ['ignore', 'pipe', 'pipe'], timeout: timeLimit * 1000, killSignal: 'SIGKILL' });
    let said = '';
    const listen = (chunk: Buffer) => {
      said = (said + chunk.toString()).slice(-4000);
    };
    child.stdout.on('data', listen);
    child.stderr.on('data', listen);
    child.on('error', reject);
    child.on('close', (code, signal) => {
      if (code === 0 && !/aborted|fatal|timestep too small/i.test(said)) resolve();
      else reject(new Error(`ngspice ended with ${signal ?? code}: ${said}`));
    });
  });
}
