/** Runs worker processes of the service for a test, as an operator would, and ends those that are left. */
import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { expect, onTestFinished } from 'vitest';

const ROOT = new URL('../..', import.meta.url).pathname;

export interface WorkerProcess {
  readonly output: () => string;
  /** Resolves when it is judging. */
  readonly ready: () => Promise<void>;
  readonly kill: () => Promise<void>;
  readonly terminate: () => Promise<number | null>;
}

export function startWorkerProcess(redisUrl: string, variables: { readonly [name: string]: string } = {}): WorkerProcess {
  const inherited = Object.entries(process.env).filter(([name]) => !name.startsWith('HOLDFAST_') && name !== 'NODE_OPTIONS');
  const child: ChildProcess = spawn(process.execPath, ['--import', 'tsx', 'server/worker.ts'], {
    cwd: ROOT,
    env: {
      ...Object.fromEntries(inherited),
      HOLDFAST_WORKERS: '1',
      HOLDFAST_CHUNK_LOCK_S: '2',
      HOLDFAST_REDIS_URL: redisUrl,
      ...variables,
    },
  });
  let output = '';
  for (const stream of [child.stdout, child.stderr]) {
    stream?.on('data', (bytes) => {
      output += bytes;
    });
  }
  const exit = once(child, 'exit').then(([code]) => code as number | null);
  const end = async (how: 'SIGTERM' | 'SIGKILL'): Promise<number | null> => {
    if (child.exitCode === null && child.signalCode === null) child.kill(how);
    return exit;
  };
  onTestFinished(async () => void (await end('SIGKILL')));
  return {
    output: () => output,
    ready: () => expect.poll(() => output, { timeout: 60_000 }).toContain('"judging"'),
    kill: async () => void (await end('SIGKILL')),
    terminate: () => end('SIGTERM'),
  };
}
