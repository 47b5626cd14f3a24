import { spawnSync } from 'node:child_process';
import { mkdirSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it, onTestFinished } from 'vitest';
import { closeRecord, openRecord } from '../../db/record.ts';
import { putEntry } from '../../server/catalogue/entries.ts';
import { embeddedQueue } from '../../server/queue/embedded-queue.ts';
import { startSimulationPool } from '../../server/simulation/simulation-pool.ts';
import { cheapScreening, dimmerId, fillCatalogue, lampId } from '../support/screening-catalogue.ts';
import { fakeQueue } from '../support/screening-fake-queue.ts';
import { testScreenings } from '../support/screening-service.ts';
import { LOSSES } from '../support/server-losing-thread.ts';
import { FIXED_NOW, temporaryFolder, temporaryRecord } from '../support/server-temporary-record.ts';

const LOSING_ENTRY = new URL('../support/server-losing-thread.ts', import.meta.url);
const PATIENCE = { timeout: 60_000 };

describe('a pairing that takes its thread with it', () => {
  it('is tried once more in a fresh thread, then given up with its inputs, and the rest goes on', async () => {
    const record = temporaryRecord();
    const entries = fillCatalogue(record, 4, 1);
    const marked = [LOSSES.diesAlways, LOSSES.hangsAlways, LOSSES.diesOnce];
    for (const [index, resistance_Ohm] of marked.entries()) {
      const entry = { lamp: { load: { kind: 'resistive' as const, resistance_Ohm } } };
      putEntry(entries, lampId(index), { kind: 'lamp', entry }, { kind: 'whatever' }, FIXED_NOW);
    }
    process.env.LOSING_THREAD_TRACE = join(temporaryFolder(), 'died');
    const pool = startSimulationPool({ threads: 1, queueLimit: 8, backgroundDeadline_s: 1, entry: LOSING_ENTRY });
    const service = testScreenings(record, embeddedQueue(pool, 1));
    const answer = await service.screenings.ask(cheapScreening());
    if (!answer.ok) throw new Error('It was to be accepted.');
    await service.settled();
    expect(await service.read(answer.screening.id)).toMatchObject({ state: 'finished', counts: { total: 4, done: 2, failed: 2, toGo: 0 } });
    const rows = await service.results(answer.screening.id);
    expect(rows.map((row) => [row.lampId, row.outcome])).toEqual([
      [lampId(0), 'failed'],
      [lampId(1), 'failed'],
      [lampId(2), 'judged'],
      [lampId(3), 'judged'],
    ]);
    expect(rows[0]?.failure).toMatchObject({
      kind: 'thread-lost',
      attempts: 2,
      pairing: { lamps: [{ lamp: { load: { resistance_Ohm: 61 } } }] },
    });
    expect([rows[0]?.summary, rows[1]?.summary]).toEqual([
      'worker exited with code: 7',
      'the thread gave no answer within 1 s and was ended',
    ]);
    expect(rows[0]?.dimmerId).toBe(dimmerId(0));
    await service.stop();
    await pool.destroy();
  });
});

/** A file system of its own, some megabytes small; undefined where this user may not mount one. */
function smallFileSystem(): string | undefined {
  const folder = join(temporaryFolder(), 'small');
  mkdirSync(folder);
  if (spawnSync('mount', ['-t', 'tmpfs', '-o', 'size=12m', 'tmpfs', folder]).status !== 0) return undefined;
  return folder;
}

describe('a disk that is full', () => {
  it('pauses the screening until there is room', async ({ skip }) => {
    const folder = smallFileSystem();
    if (folder === undefined) return skip('mounting a small file system is not permitted here');
    const record = openRecord(join(folder, 'holdfast.sqlite'), () => FIXED_NOW);
    const ballast = join(folder, 'ballast');
    onTestFinished(() => {
      rmSync(ballast, { force: true });
      closeRecord(record);
      spawnSync('umount', [folder]);
    });
    fillCatalogue(record, 20, 20);
    record.pragma('wal_checkpoint(TRUNCATE)');
    const service = testScreenings(record, fakeQueue());
    const answer = await service.screenings.ask(cheapScreening());
    if (!answer.ok) throw new Error('It was to be accepted.');
    // Fills what is left, to the last byte.
    for (let size = 8 * 2 ** 20; size >= 1; size /= 2) {
      try {
        writeFileSync(ballast, Buffer.alloc(size), { flag: 'a' });
      } catch {
        // Half as much may still fit.
      }
    }
    await expect.poll(async () => (await service.read(answer.screening.id)).pause?.reason, PATIENCE).toBe('disk-full');
    rmSync(ballast);
    await service.settled();
    expect(await service.read(answer.screening.id)).toMatchObject({ state: 'finished', counts: { total: 400, done: 400, failed: 0 } });
    expect(await service.results(answer.screening.id)).toHaveLength(400);
  });
});
