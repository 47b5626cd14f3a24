import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { existsSync, readdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it, onTestFinished } from 'vitest';
import { closeRecord, openRecord } from '../../db/record.ts';
import { briefPairing, examplePairing } from '../support/server-pairings.ts';
import { FIXED_NOW, temporaryFolder } from '../support/server-temporary-record.ts';

/** A busy machine may take long to do what is waited for; nothing here is measured in time. */
const PATIENCE = { timeout: 60_000 };

const ROOT = new URL('../..', import.meta.url).pathname;

interface Service {
  readonly process: ChildProcess;
  readonly output: () => string;
  readonly address: () => Promise<string>;
  readonly exit: Promise<number | null>;
}

function start(variables: { readonly [name: string]: string }): Service {
  const inherited = Object.entries(process.env).filter(([name]) => !name.startsWith('HOLDFAST_') && name !== 'NODE_OPTIONS');
  const child = spawn(process.execPath, ['--import', 'tsx', 'server/main.ts'], {
    cwd: ROOT,
    env: { ...Object.fromEntries(inherited), HOLDFAST_PORT: '0', HOLDFAST_WORKERS: '1', ...variables },
  });
  let output = '';
  for (const stream of [child.stdout, child.stderr]) {
    stream?.on('data', (bytes) => {
      output += bytes;
    });
  }
  const exit = once(child, 'exit').then(([code]) => code as number | null);
  onTestFinished(async () => {
    if (child.exitCode === null) child.kill('SIGKILL');
    await exit;
  });
  const address = async () => {
    const found = () => /"address":"(http:[^"]+)"/.exec(output)?.[1];
    await expect.poll(found, PATIENCE).toBeDefined();
    return found() ?? '';
  };
  return { process: child, output: () => output, address, exit };
}

interface Answer {
  readonly status: number;
  readonly verdict: unknown;
}

async function post(address: string, body: unknown): Promise<Answer> {
  const answer = await fetch(`${address}/v1/verdicts`, {
    method: 'POST',
    headers: { 'content-type': 'application/json' },
    body: JSON.stringify(body),
  });
  return { status: answer.status, verdict: await answer.json() };
}

describe('the process', () => {
  it('judges, answers what runs when it is told to stop, leaves a whole record, and finds its verdicts again', async () => {
    const folder = temporaryFolder();
    const first = start({ HOLDFAST_DATA: folder });
    const address = await first.address();
    const brief = await post(address, briefPairing());
    expect(brief.status).toBe(201);

    const running = post(address, examplePairing());
    await expect.poll(() => first.output().match(/"method":"POST"/g)?.length, PATIENCE).toBe(2);
    first.process.kill('SIGTERM');
    expect((await running).status).toBe(201);
    expect(await first.exit).toBe(0);
    expect(first.output()).toMatch(/"clean":true,"msg":"stopped"/);
    expect(readdirSync(folder)).toEqual(['holdfast.sqlite']);

    const second = start({ HOLDFAST_DATA: folder });
    const again = await post(await second.address(), briefPairing());
    expect(again).toEqual({ status: 200, verdict: brief.verdict });
    second.process.kill('SIGINT');
    expect(await second.exit).toBe(0);
  });

  it('does not start with a wrong environment: it lists what is wrong and makes no record', async () => {
    const folder = `${temporaryFolder()}/data`;
    const service = start({ HOLDFAST_DATA: folder, HOLDFAST_PORT: 'http', HOLDFAST_LOG_LEVEL: 'loud' });
    expect(await service.exit).toBe(1);
    expect(service.output()).toMatch(/HOLDFAST_PORT must be a whole number from 0 to 65535/);
    expect(service.output()).toMatch(/HOLDFAST_LOG_LEVEL must be one of/);
    expect(existsSync(folder)).toBe(false);
  });

  it('says which file is no record, and does so with a silent log as well', async () => {
    const folder = temporaryFolder();
    const file = join(folder, 'holdfast.sqlite');
    writeFileSync(file, 'x'.repeat(5000));
    for (const HOLDFAST_LOG_LEVEL of ['info', 'silent']) {
      const service = start({ HOLDFAST_DATA: folder, HOLDFAST_LOG_LEVEL });
      expect(await service.exit).toBe(1);
      expect(service.output()).toContain(`The record ${file} cannot be opened: file is not a database.`);
    }
  });

  it('does not start on a record that a newer version has changed', async () => {
    const folder = temporaryFolder();
    const record = openRecord(join(folder, 'holdfast.sqlite'), () => FIXED_NOW);
    record.prepare("INSERT INTO migrations VALUES (9999, 'from-the-future', 'x', '2030-01-01T00:00:00.000Z')").run();
    closeRecord(record);
    const service = start({ HOLDFAST_DATA: folder });
    expect(await service.exit).toBe(1);
    expect(service.output()).toMatch(/newer than this version of Holdfast/);
  });
});
