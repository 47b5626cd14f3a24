/** Runs scripts/judge.ts as a child process, as a user would, and collects what it says. */
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { text } from 'node:stream/consumers';

export const ROOT = new URL('../..', import.meta.url).pathname;
export const EXAMPLES = `${ROOT}scripts/examples/`;

export interface JudgeRun {
  readonly code: number | null;
  readonly stdout: string;
  readonly stderr: string;
}

export async function runJudge(
  args: readonly string[],
  { stdin = '', variables = {} }: { readonly stdin?: string; readonly variables?: { readonly [name: string]: string } } = {},
): Promise<JudgeRun> {
  const { NO_COLOR: _, ...inherited } = process.env;
  const child = spawn(process.execPath, ['--import', 'tsx', 'scripts/judge.ts', ...args], {
    cwd: ROOT,
    env: { ...inherited, ...variables },
  });
  child.stdin.end(stdin);
  const [stdout, stderr, [code]] = await Promise.all([text(child.stdout), text(child.stderr), once(child, 'exit')]);
  return { code, stdout, stderr };
}
