/** Requests as fast as they are answered, from autocannon in a process of its own, so that the measured process has a core to itself. */
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { text } from 'node:stream/consumers';

const AUTOCANNON = createRequire(import.meta.url).resolve('autocannon/autocannon.js');
const CONNECTIONS = 10;

export interface Load {
  readonly perSecond: number;
  /** us of processor time that the answering process took for each request; NaN where the kernel does not say */
  readonly processor_us: number;
}

/** Every answer must have the status that is expected. `pid` is of the process that answers. */
export async function loadOn(url: string, pid: number, seconds: number, status: number, headers: readonly string[] = []): Promise<Load> {
  const given = headers.flatMap((header) => ['-H', header]);
  const args = [AUTOCANNON, '-j', '-n', '-c', String(CONNECTIONS), '-d', String(seconds), ...given, url];
  const before = processorTime_s(pid);
  const child = spawn(process.execPath, args, { stdio: ['ignore', 'pipe', 'ignore'] });
  const [output] = await Promise.all([text(child.stdout), once(child, 'exit')]);
  const taken = processorTime_s(pid) - before;
  const result = JSON.parse(output) as Report;
  const answered = result.statusCodeStats[String(status)]?.count ?? 0;
  const all = Object.values(result.statusCodeStats).reduce((sum, { count }) => sum + count, 0);
  if (result.errors > 0 || answered === 0 || answered !== all) {
    throw new Error(`${url} answered ${JSON.stringify(result.statusCodeStats)} with ${result.errors} errors; ${status} was expected.`);
  }
  return { perSecond: answered / result.duration, processor_us: (taken / answered) * 1e6 };
}

/** of the kernel's clock; fixed on Linux */
const TICKS_A_SECOND = 100;

/** User and system time of a process since its start, all threads; NaN where there is no /proc. */
export function processorTime_s(pid: number): number {
  try {
    // The name in brackets may hold spaces; the fields after it are counted from the state.
    const fields = readFileSync(`/proc/${pid}/stat`, 'utf8').split(') ').at(-1)?.split(' ') ?? [];
    return (Number(fields[11]) + Number(fields[12])) / TICKS_A_SECOND;
  } catch {
    return Number.NaN;
  }
}

interface Report {
  readonly errors: number;
  readonly duration: number;
  readonly statusCodeStats: { readonly [status: string]: { readonly count: number } };
}
