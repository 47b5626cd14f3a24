/** Starts a Redis of the distribution for a test: on a free port, with its append-only file on, in a folder of its own. */
import { type ChildProcess, spawn, spawnSync } from 'node:child_process';
import { once } from 'node:events';
import { createServer } from 'node:net';
import { onTestFinished } from 'vitest';
import { temporaryFolder } from './server-temporary-record.ts';

export const hasRedisServer = spawnSync('redis-server', ['--version']).status === 0;

export interface RedisServer {
  readonly url: string;
  /** Ends it, and starts it again on the same port and folder. */
  restart(how: 'SIGTERM' | 'SIGKILL'): Promise<void>;
  stop(): Promise<void>;
  start(): Promise<void>;
}

export async function startRedisServer(): Promise<RedisServer> {
  const folder = temporaryFolder();
  const port = await freePort();
  let child: ChildProcess | undefined;

  const start = async (): Promise<void> => {
    const options = ['--port', String(port), '--bind', '127.0.0.1', '--dir', folder, '--appendonly', 'yes', '--save', ''];
    const started = spawn('redis-server', [...options, '--appendfsync', 'always', '--maxmemory-policy', 'noeviction'], {
      stdio: ['ignore', 'pipe', 'inherit'],
    });
    child = started;
    await new Promise<void>((resolve, reject) => {
      started.stdout.on('data', (bytes) => {
        if (String(bytes).includes('Ready to accept connections')) resolve();
      });
      started.once('exit', (code) => reject(new Error(`redis-server ended with ${code} before it was ready.`)));
    });
  };
  const end = async (how: 'SIGTERM' | 'SIGKILL'): Promise<void> => {
    if (child === undefined || child.exitCode !== null || child.signalCode !== null) return;
    const exit = once(child, 'exit');
    child.kill(how);
    await exit;
  };

  onTestFinished(() => end('SIGKILL'));
  await start();
  return {
    url: `redis://127.0.0.1:${port}`,
    start,
    stop: () => end('SIGTERM'),
    restart: async (how) => {
      await end(how);
      await start();
    },
  };
}

async function freePort(): Promise<number> {
  const server = createServer().listen(0, '127.0.0.1');
  await once(server, 'listening');
  const address = server.address();
  server.close();
  await once(server, 'close');
  if (address === null || typeof address === 'string') throw new Error('No port was free.');
  return address.port;
}
