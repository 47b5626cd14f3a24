import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { join } from 'node:path';
import { createInterface } from 'node:readline';
import { describe, expect, it, onTestFinished } from 'vitest';
import { entryStore } from '../../db/entries.ts';
import { importStaging } from '../../db/import-staging.ts';
import { closeRecord, openRecord } from '../../db/record.ts';
import { putEntry } from '../../server/catalogue/entries.ts';
import { applyList } from '../../server/imports/import-applying.ts';
import { IMPORT_LIMITS } from '../../server/imports/import-limits.ts';
import { resumeImports } from '../../server/imports/importing.ts';
import { stageList } from '../../server/imports/staged-import.ts';
import { FIXED_NOW, temporaryFolder, temporaryRecord } from '../support/server-temporary-record.ts';
import { openUpload } from './open-upload.ts';

const now = () => FIXED_NOW;
const ROOT = new URL('../..', import.meta.url).pathname;

async function* rows(count: number) {
  for (let row = 1; row <= count; row += 1) yield { row, value: { id: `lamp-${row}`, lamp: lampOf(40) } };
}

function lampOf(ratedPower_W: number) {
  return { ratedPower_W, load: { kind: 'resistive' as const } };
}

async function staged(count: number) {
  const record = temporaryRecord();
  const [entries, staging] = [entryStore(record), importStaging(record)];
  const importId = staging.begin('lamp', FIXED_NOW.toISOString());
  await stageList({ entries, staging, limits: IMPORT_LIMITS }, importId, 'lamp', rows(count), true);
  const total = (table: string) => record.prepare<[], number>(`SELECT count(*) FROM ${table}`).pluck().get();
  return { record, entries, staging, importId, total };
}

describe('an import whose process died', () => {
  it('is forgotten at the next start where the list was not whole yet', async () => {
    const { entries, staging, total } = await staged(300);
    expect(await resumeImports({ entries, staging, now })).toBe(0);
    expect([total('entries'), total('imports'), total('import_rows')]).toEqual([0, 0, 0]);
  });

  it('is finished at the next start where it was decided, without undoing what others did to rows that were done', async () => {
    const { entries, staging, importId, total } = await staged(300);
    staging.decide(importId);
    // As a process that died after some rows leaves it.
    const broken = { ...entries, put: failsAfter(100, entries.put) };
    await expect(applyList({ entries: broken, staging, now }, importId, 'lamp', false).done).rejects.toThrow('out of space');
    const before = Number(total('entries'));
    expect([before > 0, before <= 100]).toEqual([true, true]);
    putEntry(entries, 'lamp-1', { kind: 'lamp', entry: { lamp: lampOf(25) } }, { kind: 'whatever' }, FIXED_NOW);

    expect(await resumeImports({ entries, staging, now })).toBe(1);
    expect([total('entries'), total('revisions'), total('imports'), total('import_rows')]).toEqual([300, 301, 0, 0]);
    expect(JSON.parse(entries.find('lamp', 'lamp-1')?.content ?? '{}')).toEqual({ lamp: lampOf(25) });
    expect(await resumeImports({ entries, staging, now })).toBe(0);
  });
});

function failsAfter<Arguments extends unknown[], Result>(count: number, act: (...args: Arguments) => Result) {
  let calls = 0;
  return (...args: Arguments): Result => {
    calls += 1;
    if (calls > count) throw new Error('out of space');
    return act(...args);
  };
}

describe('a service that is killed', () => {
  it.each([
    ['while a list arrives', 'arriving', 0],
    ['while a list is applied', 'applying', 3000],
  ] as const)('%s has none of it or all of it after its next start', async (_, when, entriesAfter) => {
    const folder = temporaryFolder();
    const service = await start(folder);
    const upload = openUpload(service.port, '/v1/imports/lamps?onError=stop');
    await upload.send('id,ratedPower_W,load.kind\n');
    await upload.send(Array.from({ length: 3000 }, (_, index) => `lamp-${index},40,resistive\n`).join(''));
    const file = join(folder, 'holdfast.sqlite');
    if (when === 'applying') {
      upload.end();
      await once(await upload.answer, 'readable');
    } else {
      await expect.poll(() => countIn(file, 'import_rows'), { timeout: 60_000 }).toBeGreaterThan(0);
    }
    service.kill();
    await service.exit;
    const left = countIn(file, 'entries');

    const again = await start(folder);
    expect([left <= entriesAfter, countIn(file, 'entries')]).toEqual([true, entriesAfter]);
    again.kill();
    await again.exit;
    expect([countIn(file, 'imports'), countIn(file, 'import_rows')]).toEqual([0, 0]);
  });
});

function countIn(file: string, table: string): number {
  const record = openRecord(file, now);
  try {
    return record.prepare<[], number>(`SELECT count(*) FROM ${table}`).pluck().get() ?? -1;
  } finally {
    closeRecord(record);
  }
}

async function start(folder: string) {
  const inherited = Object.entries(process.env).filter(([name]) => !name.startsWith('HOLDFAST_') && name !== 'NODE_OPTIONS');
  const child = spawn(process.execPath, ['--import', 'tsx', 'server/main.ts'], {
    cwd: ROOT,
    env: { ...Object.fromEntries(inherited), HOLDFAST_PORT: '0', HOLDFAST_WORKERS: '1', HOLDFAST_DATA: folder },
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  const exit = once(child, 'exit');
  const kill = () => void child.kill('SIGKILL');
  onTestFinished(kill);
  const port = await new Promise<number>((resolve) => {
    createInterface({ input: child.stdout }).on('line', (line) => {
      const [, found] = /"address":"http:[^"]+:(\d+)"/.exec(line) ?? [];
      if (found !== undefined) resolve(Number(found));
    });
  });
  return { port, exit, kill };
}
