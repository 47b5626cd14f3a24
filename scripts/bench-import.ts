/**
 * Measures an import of 100,000 lamps into a service that runs as it does for its users: rows per second, the most memory it held, and
 * how long a health check waits meanwhile.
 *
 *   npm run bench:import [-- rows]
 */
import { createReadStream, createWriteStream, existsSync, mkdtempSync, readFileSync, rmSync, statSync } from 'node:fs';
import { Agent, get, request } from 'node:http';
import { cpus, tmpdir, totalmem } from 'node:os';
import { join } from 'node:path';
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { setTimeout as wait } from 'node:timers/promises';
import { pathToFileURL } from 'node:url';
import { lampListCsv } from './lamp-list.ts';
import { startService } from './service-process.ts';

export interface ImportMeasurement {
  readonly rows: number;
  readonly bytes: number;
  /** s from the first byte sent to the last line received */
  readonly duration_s: number;
  readonly rowsPerSecond: number;
  /** MiB; the kernel's own high-water mark where it keeps one, else the highest of the samples */
  readonly peakMemory_MiB: number;
  /** MiB; the same before the import: what the process and its simulation thread hold anyway */
  readonly memoryBefore_MiB: number;
  /** ms, of /health/live asked at a fixed rate: without anything else, and during the import */
  readonly healthIdle_ms: Latency;
  readonly healthDuring_ms: Latency;
}

export interface Latency {
  readonly asked: number;
  readonly p50: number;
  readonly p99: number;
  readonly max: number;
}

/** ms between two health checks; each is sent at its time, whether or not the one before has been answered */
const HEALTH_INTERVAL = 20;
const IDLE_CHECKS = 250;

export async function measureImport(rows = 100_000): Promise<ImportMeasurement> {
  const folder = mkdtempSync(join(tmpdir(), 'holdfast-bench-import-'));
  try {
    const file = join(folder, 'lamps.csv');
    await pipeline(Readable.from(lampListCsv(rows)), createWriteStream(file));
    const service = await startService(join(folder, 'data'));
    try {
      const idle = healthChecks(service.address);
      await wait(IDLE_CHECKS * HEALTH_INTERVAL);
      const healthIdle_ms = await idle.stop();

      const memoryBefore_MiB = peakMemory(service.pid) ?? Number.NaN;
      const during = healthChecks(service.address);
      const started = performance.now();
      const created = await importFile(service.address, file);
      const duration_s = (performance.now() - started) / 1000;
      const healthDuring_ms = await during.stop();
      if (created !== rows) throw new Error(`${created} of ${rows} lamps were created: this measured something else.`);
      const peakMemory_MiB = peakMemory(service.pid) ?? during.highestSeen_MiB();
      return {
        rows,
        bytes: statSync(file).size,
        duration_s,
        rowsPerSecond: rows / duration_s,
        peakMemory_MiB,
        memoryBefore_MiB,
        healthIdle_ms,
        healthDuring_ms,
      };
    } finally {
      await service.stop();
    }
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

/** Gives the number of lamps that the summary says were created. */
function importFile(address: string, file: string): Promise<number> {
  return new Promise((resolve, reject) => {
    const sending = request(
      `${address}/v1/imports/lamps?onError=stop`,
      { method: 'POST', headers: { 'content-type': 'text/csv' } },
      (answer) => {
        let end = '';
        answer.on('data', (bytes: Buffer) => {
          end = (end + bytes.toString()).slice(-1000);
        });
        answer.on('end', () => {
          const created = /"created":(\d+)/.exec(end.trimEnd().split('\n').at(-1) ?? '')?.[1];
          if (created === undefined) reject(new Error(`The import was answered with ${answer.statusCode}: ${end}`));
          else resolve(Number(created));
        });
        answer.on('error', reject);
      },
    );
    sending.on('error', reject);
    pipeline(createReadStream(file), sending).catch(reject);
  });
}

function healthChecks(address: string): { readonly stop: () => Promise<Latency>; readonly highestSeen_MiB: () => number } {
  // a connection for each, as a supervisor's checks have
  const agent = new Agent({ keepAlive: false });
  const waits: number[] = [];
  const open = new Set<Promise<void>>();
  let highest = 0;
  const ask = (path: string, use: (body: string, waited: number) => void): void => {
    const sent = performance.now();
    const asking = new Promise<void>((resolve, reject) => {
      get(`${address}${path}`, { agent }, (answer) => {
        let body = '';
        answer.on('data', (bytes) => {
          body += bytes;
        });
        answer.on('end', () => resolve(use(body, performance.now() - sent)));
      }).on('error', reject);
    }).finally(() => open.delete(asking));
    open.add(asking);
  };
  const timer = setInterval(() => ask('/health/live', (_, waited) => waits.push(waited)), HEALTH_INTERVAL);
  const sampler = setInterval(
    () =>
      ask('/metrics', (body) => {
        highest = Math.max(highest, Number(/^process_resident_memory_bytes (\d+)$/m.exec(body)?.[1] ?? 0) / 2 ** 20);
      }),
    500,
  );
  return {
    highestSeen_MiB: () => highest,
    stop: async () => {
      clearInterval(timer);
      clearInterval(sampler);
      await Promise.all(open);
      agent.destroy();
      return latencyOf(waits);
    },
  };
}

function latencyOf(waits: readonly number[]): Latency {
  const sorted = [...waits].sort((a, b) => a - b);
  const at = (share: number) => sorted[Math.min(sorted.length - 1, Math.floor(sorted.length * share))] ?? Number.NaN;
  return { asked: sorted.length, p50: at(0.5), p99: at(0.99), max: at(1) };
}

/** MiB; undefined where the system does not say */
function peakMemory(pid: number): number | undefined {
  const status = `/proc/${pid}/status`;
  const kib = existsSync(status) ? /^VmHWM:\s+(\d+) kB$/m.exec(readFileSync(status, 'utf8'))?.[1] : undefined;
  return kib === undefined ? undefined : Number(kib) / 1024;
}

/** The measurement in lines for a terminal. */
export function importMeasurementText(measured: ImportMeasurement): string {
  const latency = ({ asked, p50, p99, max }: Latency) =>
    `p50 ${p50.toFixed(1)} ms, p99 ${p99.toFixed(1)} ms, longest ${max.toFixed(1)} ms, ${asked} asked`;
  return [
    `${measured.rows} lamps, ${(measured.bytes / 2 ** 20).toFixed(1)} MiB of CSV`,
    `imported in    ${measured.duration_s.toFixed(1)} s, ${Math.round(measured.rowsPerSecond)} rows/s`,
    `peak memory    ${Math.round(measured.peakMemory_MiB)} MiB of the whole service process, ${Math.round(measured.memoryBefore_MiB)} MiB before`,
    `/health/live   ${latency(measured.healthDuring_ms)}`,
    `  when idle    ${latency(measured.healthIdle_ms)}`,
  ].join('\n');
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) {
  const rows = Number(process.argv[2] ?? 100_000);
  if (!Number.isInteger(rows) || rows < 1) throw new Error('The number of rows must be a whole number.');
  const [{ model } = { model: 'unknown processor' }] = cpus();
  console.log(`${model}, ${cpus().length} cores, ${Math.round(totalmem() / 2 ** 30)} GiB, Node ${process.version}`);
  console.log(importMeasurementText(await measureImport(rows)));
}
