import { readdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it, onTestFinished } from 'vitest';
import { startService } from '../../scripts/service-process.ts';
import { briefPairing } from '../support/server-pairings.ts';
import { temporaryFolder } from '../support/server-temporary-record.ts';
import { runRecordScript } from './record-script-run.ts';

async function service(folder: string) {
  const running = await startService(folder);
  let stopped: Promise<number | null> | undefined;
  const stop = () => {
    stopped ??= running.stop();
    return stopped;
  };
  onTestFinished(async () => void (await stop()));
  return { address: running.address, stop };
}

async function judge(address: string, latchingCurrent_mA: number): Promise<number> {
  const pairing = briefPairing();
  pairing.dimmer.latchingCurrent_mA = latchingCurrent_mA;
  const headers = { 'content-type': 'application/json' };
  return (await fetch(`${address}/v1/verdicts`, { method: 'POST', headers, body: JSON.stringify(pairing) })).status;
}

describe('backup and restore', () => {
  it('save a record under a running service, refuse to replace it there, and bring it back once the service has stopped', async () => {
    const [data, elsewhere] = [temporaryFolder(), temporaryFolder()];
    const backup = join(elsewhere, 'monday.sqlite');
    const first = await service(data);
    expect(await judge(first.address, 50)).toBe(201);

    const saved = await runRecordScript('backup', [backup], data);
    expect([saved.code, saved.stderr]).toEqual([0, '']);
    expect(saved.stdout).toMatch(/monday\.sqlite holds the record, checked: .*\b1 verdicts/);
    expect(readdirSync(elsewhere)).toEqual(['monday.sqlite']);
    // After the backup: what a restore has to undo.
    expect(await judge(first.address, 60)).toBe(201);

    const refused = await runRecordScript('restore', [backup], data);
    expect([refused.code, refused.stdout]).toEqual([1, '']);
    expect(refused.stderr).toMatch(/A process has .*holdfast\.sqlite open\. Stop the service/);
    expect(await judge(first.address, 60)).toBe(200);
    expect(await first.stop()).toBe(0);

    const restored = await runRecordScript('restore', [backup], data);
    expect([restored.code, restored.stderr]).toEqual([0, '']);
    const [, replaced = ''] = /What it replaced is in (\S+)\.\n$/.exec(restored.stdout) ?? [];
    expect(readdirSync(data).sort()).toEqual(['holdfast.sqlite', replaced.slice(data.length + 1)]);

    const second = await service(data);
    expect(await judge(second.address, 50)).toBe(200);
    expect(await judge(second.address, 60)).toBe(201);
    expect(await second.stop()).toBe(0);

    // What was replaced is a backup like any other.
    expect((await runRecordScript('restore', [replaced], data)).code).toBe(0);
    const third = await service(data);
    expect(await judge(third.address, 60)).toBe(200);
    expect(await third.stop()).toBe(0);
  });
});

describe('a backup or a restore that was called wrong', () => {
  it.each([
    ['backup', [], /name the backup file\n\nUsage: npm run backup/],
    ['restore', ['one', 'two'], /one file at a time; these are 2: one two/],
    ['backup', ['--overwrite', 'one'], /Unknown option '--overwrite'/],
  ] as const)('%s %j says how it is called, and ends with 2', async (script, args, says) => {
    const folder = temporaryFolder();
    const { code, stderr } = await runRecordScript(script, args, folder);
    expect(code).toBe(2);
    expect(stderr).toMatch(says);
    expect(readdirSync(folder)).toEqual([]);
  });

  it('names every variable that is wrong, and ends with 2', async () => {
    const { code, stderr } = await runRecordScript('backup', ['x'], temporaryFolder(), { HOLDFAST_PORT: 'http', HOLDFAST_DATE: 'x' });
    expect(code).toBe(2);
    expect(stderr).toMatch(/HOLDFAST_PORT must be a whole number.*HOLDFAST_DATE is not a variable|HOLDFAST_DATE.*HOLDFAST_PORT/);
  });

  it('with a file that is no backup ends with 1 and makes nothing', async () => {
    const folder = temporaryFolder();
    writeFileSync(join(folder, 'letter.txt'), 'Dear guest, the light in room 4 flickers. '.repeat(100));
    const { code, stderr } = await runRecordScript('restore', [join(folder, 'letter.txt')], join(folder, 'data'));
    expect(code).toBe(1);
    expect(stderr).toMatch(/restore: .*letter\.txt cannot be read as a record: file is not a database/);
    expect(readdirSync(folder)).toEqual(['letter.txt']);
  });
});
