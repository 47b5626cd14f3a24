/** Requests as fast as they are answered, from autocannon in a process of its own, so that the measured process has a core to itself. */
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { createRequire } from 'node:module';
import { text } from 'node:stream/consumers';

const AUTOCANNON = createRequire(import.meta.url).resolve('autocannon/autocannon.js');
const CONNECTIONS = 10;

/** Requests answered a second, on average; every answer must have the status that is expected. */
export async function requestsPerSecond(url: string, seconds: number, status: number, headers: readonly string[] = []): Promise<number> {
  const given = headers.flatMap((header) => ['-H', header]);
  const args = [AUTOCANNON, '-j', '-n', '-c', String(CONNECTIONS), '-d', String(seconds), ...given, url];
  const child = spawn(process.execPath, args, { stdio: ['ignore', 'pipe', 'ignore'] });
  const [output] = await Promise.all([text(child.stdout), once(child, 'exit')]);
  const result = JSON.parse(output) as Report;
  const answered = result.statusCodeStats[String(status)]?.count ?? 0;
  const all = Object.values(result.statusCodeStats).reduce((sum, { count }) => sum + count, 0);
  if (result.errors > 0 || answered === 0 || answered !== all) {
    throw new Error(`${url} answered ${JSON.stringify(result.statusCodeStats)} with ${result.errors} errors; ${status} was expected.`);
  }
  return answered / result.duration;
}

interface Report {
  readonly errors: number;
  readonly duration: number;
  readonly statusCodeStats: { readonly [status: string]: { readonly count: number } };
}
