/** What the parts of the screening bench share: a catalogue from the guest-house lists, a screening of it in this process, a Redis. */
import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import pino from 'pino';
import { closeRecord, openRecord, type RecordDatabase } from '../db/record.ts';
import { type Stores, storesOf } from '../db/stores.ts';
import { putEntry } from '../server/catalogue/entries.ts';
import type { JudgingQueue } from '../server/queue/judging-queue.ts';
import type { AskedDimmer, AskedLamp } from '../server/schemas/pairing.ts';
import { type AskedScreening, askedScreening } from '../server/schemas/screening.ts';
import { screeningService } from '../server/screenings/screening-service.ts';

const ROOT = new URL('..', import.meta.url).pathname;

export async function inTemporaryFolder<T>(act: (folder: string) => Promise<T>): Promise<T> {
  const folder = mkdtempSync(join(tmpdir(), 'holdfast-bench-'));
  try {
    return await act(folder);
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

export async function withRecord<T>(act: (record: RecordDatabase, stores: Stores) => Promise<T>): Promise<T> {
  return inTemporaryFolder(async (folder) => {
    const record = openRecord(join(folder, 'holdfast.sqlite'), () => new Date());
    try {
      return await act(record, storesOf(record));
    } finally {
      closeRecord(record);
    }
  });
}

export function fillCatalogue({ entries }: Stores, lamps: readonly AskedLamp[], dimmers: readonly AskedDimmer[]): void {
  const [at, whatever] = [new Date(), { kind: 'whatever' }] as const;
  entries.together(() => {
    for (const [index, lamp] of lamps.entries()) putEntry(entries, `lamp-${index}`, { kind: 'lamp', entry: { lamp } }, whatever, at);
    for (const [index, dimmer] of dimmers.entries()) {
      putEntry(entries, `dimmer-${index}`, { kind: 'dimmer', entry: { dimmer } }, whatever, at);
    }
  });
}

export function wholeCatalogue(changes: object = {}): AskedScreening {
  return askedScreening.parse({
    lamps: { all: true },
    dimmers: { all: true },
    mains: { voltage_V: 230, frequency_Hz: 50 },
    ...changes,
  });
}

export interface Screened {
  readonly took_s: number;
  readonly done: number;
  readonly stored: number;
}

/** Runs one screening to its end; the time is that from its beginning to its end. The queue is closed afterwards. */
export async function screen(stores: Stores, queue: JudgingQueue, asked: AskedScreening): Promise<Screened> {
  const { screenings } = screeningService({ stores, queue, now: () => new Date(), logger: pino({ level: 'silent' }) });
  const answer = await screenings.ask(asked);
  if (!answer.ok) throw new Error(`The bench asked for a screening that is refused: ${JSON.stringify(answer.issues)}`);
  const began = performance.now();
  screenings.start();
  await screenings.idle();
  const took_s = (performance.now() - began) / 1000;
  const { counts } = (await screenings.read(answer.screening.id)) ?? answer.screening;
  await screenings.stop();
  if (counts.toGo > 0 || counts.failed > 0) throw new Error(`The screening ended with ${JSON.stringify(counts)}.`);
  return { took_s, done: counts.done, stored: counts.stored };
}

export interface Service {
  readonly url: string;
  readonly pid: number;
  stop(): Promise<void>;
}

/** A Redis of its own with its append-only file on, as docker-compose.yml has it. */
export async function startRedis(folder: string): Promise<Service> {
  const server = createServer().listen(0, '127.0.0.1');
  await once(server, 'listening');
  const address = server.address();
  server.close();
  const port = typeof address === 'object' && address !== null ? address.port : 0;
  const options = ['--port', String(port), '--bind', '127.0.0.1', '--dir', folder, '--appendonly', 'yes', '--save', ''];
  const child = spawn('redis-server', options, { stdio: ['ignore', 'pipe', 'inherit'] });
  await lineWith(child, 'Ready to accept connections');
  return { url: `redis://127.0.0.1:${port}`, pid: child.pid ?? 0, stop: () => ended(child) };
}

export async function startWorker(redisUrl: string, threads: number): Promise<Service> {
  const child = spawn(process.execPath, ['--import', 'tsx', 'server/worker.ts'], {
    cwd: ROOT,
    env: { ...process.env, HOLDFAST_REDIS_URL: redisUrl, HOLDFAST_WORKERS: String(threads), HOLDFAST_CHUNK_LOCK_S: '5' },
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  await lineWith(child, '"judging"');
  return { url: redisUrl, pid: child.pid ?? 0, stop: () => ended(child) };
}

function lineWith(child: ChildProcess, text: string): Promise<void> {
  return new Promise((resolve, reject) => {
    child.stdout?.on('data', (bytes) => {
      if (String(bytes).includes(text)) resolve();
    });
    child.once('exit', (code) => reject(new Error(`${child.spawnfile} ended with ${code} before it said ${text}.`)));
  });
}

async function ended(child: ChildProcess): Promise<void> {
  const exit = once(child, 'exit');
  child.kill('SIGTERM');
  await exit;
}
