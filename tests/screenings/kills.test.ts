import { describe, expect, it } from 'vitest';
import { runTrial, type TrialOutcome } from '../../scripts/screening-trial.ts';
import { hasRedisServer, startRedisServer } from '../support/queue-redis-server.ts';
import { startWorkerProcess, type WorkerProcess } from '../support/queue-worker-process.ts';

const SIZE = { lamps: 20, dimmers: 15 };
const PAIRINGS = 300;
/** another one at every run; it is part of what a failure shows */
const seed = Date.now() % 1_000_000;

let undisturbed: Promise<TrialOutcome> | undefined;
/** The same for both engines. */
function undisturbedRun(): Promise<TrialOutcome> {
  undisturbed ??= runTrial({ ...SIZE, kills: 0, seed });
  return undisturbed;
}

async function expectTheSame({ kills, ...trial }: TrialOutcome, leastKills: number): Promise<void> {
  const { csv, counts, verdicts, pairs } = await undisturbedRun();
  expect(counts).toEqual({ total: PAIRINGS, stored: 0, done: PAIRINGS, failed: 0, toGo: 0 });
  expect(csv.split('\r\n')).toHaveLength(PAIRINGS + 2);
  expect([verdicts, pairs]).toEqual([PAIRINGS, PAIRINGS]);
  expect({ seed, ...trial }).toEqual({ seed, csv, counts, verdicts, pairs });
  // A fast machine may be done before the last one.
  expect({ seed, kills }).toEqual({ seed, kills: expect.toSatisfy((many: number) => many >= leastKills) });
}

describe('a service that is killed at random moments of a screening', { timeout: 600_000 }, () => {
  it('goes on by itself: none lost, none doubled, and the results are those of an undisturbed run', async () => {
    await expectTheSame(await runTrial({ ...SIZE, kills: 4, seed }), 3);
  });

  it.runIf(hasRedisServer)('and so it is over Redis, where workers are killed as well', async () => {
    const { url } = await startRedisServer();
    let worker: WorkerProcess = startWorkerProcess(url);
    const alsoKill = async (): Promise<void> => {
      await worker.kill();
      worker = startWorkerProcess(url);
      await worker.ready();
    };
    await worker.ready();
    await expectTheSame(await runTrial({ ...SIZE, kills: 4, seed, variables: { HOLDFAST_REDIS_URL: url }, alsoKill }), 2);
  });
});
