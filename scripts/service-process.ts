/** Runs the service as whoever installs it does: a process of its own on a free port, with a folder for its data. For checks, not for use. */
import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { createInterface } from 'node:readline';

const ROOT = new URL('..', import.meta.url).pathname;

export interface ServiceProcess {
  readonly address: string;
  readonly pid: number;
  /** asks it to stop and gives the exit code, null where it was killed */
  stop(): Promise<number | null>;
  /** ends it at once, as a power cut would */
  kill(): Promise<void>;
}

/** `variables` are set beside those of the folder, a free port and one thread. */
export async function startService(dataFolder: string, variables: { readonly [name: string]: string } = {}): Promise<ServiceProcess> {
  const inherited = Object.entries(process.env).filter(([name]) => !name.startsWith('HOLDFAST_') && name !== 'NODE_OPTIONS');
  const child = spawn(process.execPath, ['--import', 'tsx', 'server/main.ts'], {
    cwd: ROOT,
    env: { ...Object.fromEntries(inherited), HOLDFAST_PORT: '0', HOLDFAST_WORKERS: '1', HOLDFAST_DATA: dataFolder, ...variables },
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  const exit = once(child, 'exit').then(([code]) => code as number | null);
  const address = await Promise.race([addressIn(child), exit]);
  if (typeof address !== 'string') throw new Error(`The service ended with ${address} before it listened.`);
  return {
    address,
    pid: child.pid ?? 0,
    stop: () => {
      child.kill('SIGTERM');
      return exit;
    },
    kill: async () => {
      child.kill('SIGKILL');
      await exit;
    },
  };
}

/** Its log is one JSON object a line; the one that says where it listens is awaited, all are read so that the pipe never fills. */
function addressIn(child: ChildProcess): Promise<string> {
  return new Promise((resolve) => {
    if (child.stdout === null) throw new Error('The service was started without a pipe for its log.');
    createInterface({ input: child.stdout }).on('line', (line) => {
      const found = /"address":"(http:[^"]+)"/.exec(line)?.[1];
      if (found !== undefined) resolve(found);
    });
  });
}
