/** Runs scripts/backup.ts or scripts/restore.ts as a child process on a folder, as whoever runs the service would. */
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { text } from 'node:stream/consumers';
import { ROOT } from './judge-run.ts';

export interface ScriptRun {
  readonly code: number | null;
  readonly stdout: string;
  readonly stderr: string;
}

export async function runRecordScript(
  script: 'backup' | 'restore',
  args: readonly string[],
  dataFolder: string,
  variables: { readonly [name: string]: string } = {},
): Promise<ScriptRun> {
  const inherited = Object.entries(process.env).filter(([name]) => !name.startsWith('HOLDFAST_'));
  const child = spawn(process.execPath, ['--import', 'tsx', `scripts/${script}.ts`, ...args], {
    cwd: ROOT,
    env: { ...Object.fromEntries(inherited), HOLDFAST_DATA: dataFolder, ...variables },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  const [stdout, stderr, [code]] = await Promise.all([text(child.stdout), text(child.stderr), once(child, 'exit')]);
  return { code, stdout, stderr };
}
