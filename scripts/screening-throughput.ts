/**
 * Pairings an hour: the engine called in a bare loop, the embedded threads with one worker and with two, and a worker process over Redis,
 * all on the same pairings, in turns, so that whatever else the machine does meets each of them alike.
 */

import { embeddedQueue } from '../server/queue/embedded-queue.ts';
import { redisQueue } from '../server/queue/redis-queue.ts';
import type { AskedDimmer, AskedLamp } from '../server/schemas/pairing.ts';
import { judgeAsked } from '../server/simulation/asked-judging.ts';
import { startSimulationPool } from '../server/simulation/simulation-pool.ts';
import { completePairing } from '../server/verdicts/pairing-completion.ts';
import { toModel } from '../server/verdicts/pairing-to-model.ts';
import { figure, type Spread, spreadOf } from './bench-figures.ts';
import { guestHouseDimmer, guestHouseLamp } from './guest-house-lists.ts';
import { fillCatalogue, inTemporaryFolder, screen, startRedis, startWorker, wholeCatalogue, withRecord } from './screening-bench-parts.ts';

export interface ThroughputSize {
  readonly lamps: number;
  readonly dimmers: number;
  readonly rounds: number;
  readonly redis: boolean;
}

const WAYS = ['bare loop', 'embedded, 1 worker', 'embedded, 2 workers', 'Redis, 1 worker'] as const;
type Way = (typeof WAYS)[number];

/** of the 500 lamps and 40 dimmers: far apart, so that a few of them are like all */
const LAMP_STEP = 61;
const DIMMER_STEP = 7;
/** pairings that every thread judges before anything is measured: it then runs compiled */
const WARM_UP = 4;

export async function measureThroughput({ lamps, dimmers, rounds, redis }: ThroughputSize): Promise<void> {
  const lampList = Array.from({ length: lamps }, (_, index) => guestHouseLamp((index * LAMP_STEP) % 500));
  const dimmerList = Array.from({ length: dimmers }, (_, index) => guestHouseDimmer((index * DIMMER_STEP) % 40));
  const pairings = lamps * dimmers;
  console.log(`\nThroughput: ${lamps} lamps x ${dimmers} dimmers, whole dial, all corners, ${rounds} rounds`);
  const seconds: { [way in Way]: number[] } = {
    'bare loop': [],
    'embedded, 1 worker': [],
    'embedded, 2 workers': [],
    'Redis, 1 worker': [],
  };
  judgeInLoop(lampList.slice(0, 1), dimmerList.slice(0, WARM_UP));
  for (let round = 0; round < rounds; round += 1) {
    const note = (way: Way, took_s: number): void => {
      seconds[way].push(took_s);
      console.log(`  round ${round + 1}, ${way}: ${figure(took_s)} s`);
    };
    note('bare loop', judgeInLoop(lampList, dimmerList));
    note('embedded, 1 worker', await inThreads(1, lampList, dimmerList));
    if (redis) note('Redis, 1 worker', await overRedis(lampList, dimmerList));
    note('embedded, 2 workers', await inThreads(2, lampList, dimmerList));
  }
  const spreads = WAYS.filter((way) => seconds[way].length > 0).map((way) => [way, spreadOf(seconds[way])] as const);
  for (const [way, spread] of spreads) console.log(`  ${way.padEnd(20)} ${perHour(pairings, spread)}`);
  const [bare, one, two, overQueue] = WAYS.map((way) => spreadOf(seconds[way]).median) as [number, number, number, number];
  console.log(`  scaling from 1 to 2 workers: ${figure(one / two)} times (at least 1.8 is asked for)`);
  console.log(`  the embedded threads cost ${percent(one / bare)} over the bare loop (at most 10 %)`);
  if (redis) console.log(`  Redis costs ${percent(overQueue / bare)} over the bare loop (at most 15 %)`);
}

function perHour(pairings: number, { median, least, most }: Spread): string {
  const [slow, middle, fast] = [most, median, least].map((seconds) => figure((pairings * 3600) / seconds));
  return `${middle} pairings an hour (${slow} to ${fast})`;
}

function percent(ratio: number): string {
  return `${((ratio - 1) * 100).toFixed(1)} %`;
}

/** s */
function judgeInLoop(lamps: readonly AskedLamp[], dimmers: readonly AskedDimmer[]): number {
  const { mains } = wholeCatalogue();
  const began = performance.now();
  for (const lamp of lamps) {
    for (const dimmer of dimmers) {
      const { pairing, options } = toModel(completePairing({ mains, dimmer, lamps: [{ count: 1, lamp }] }));
      if (!judgeAsked(pairing, options).ok) throw new Error('The model refuses a pairing of the bench.');
    }
  }
  return (performance.now() - began) / 1000;
}

async function inThreads(threads: number, lamps: readonly AskedLamp[], dimmers: readonly AskedDimmer[]): Promise<number> {
  const pool = startSimulationPool({ threads, queueLimit: 1 });
  try {
    const { mains } = wholeCatalogue();
    const [lamp] = lamps;
    if (lamp === undefined) throw new Error('The bench needs a lamp.');
    const warmUp = Array.from({ length: threads * WARM_UP }, (_, index) => guestHouseDimmer(index));
    await Promise.all(
      warmUp.map((dimmer) => {
        const { pairing, options } = toModel(completePairing({ mains, dimmer, lamps: [{ count: 1, lamp }] }));
        return pool.judgeInBackground(pairing, options);
      }),
    );
    return await withRecord(async (_, stores) => {
      fillCatalogue(stores, lamps, dimmers);
      return (await screen(stores, embeddedQueue(pool, threads), wholeCatalogue())).took_s;
    });
  } finally {
    await pool.destroy();
  }
}

async function overRedis(lamps: readonly AskedLamp[], dimmers: readonly AskedDimmer[]): Promise<number> {
  return inTemporaryFolder(async (folder) => {
    const redis = await startRedis(folder);
    const worker = await startWorker(redis.url, 1);
    try {
      // The worker's thread is warmed by pairings that are not measured, at another voltage.
      const warmUp = wholeCatalogue({ mains: { voltage_V: 240, frequency_Hz: 50 } });
      await withRecord(async (_, stores) => {
        fillCatalogue(stores, lamps.slice(0, 1), dimmers.slice(0, WARM_UP));
        await screen(stores, redisQueue(redis.url), warmUp);
      });
      return await withRecord(async (_, stores) => {
        fillCatalogue(stores, lamps, dimmers);
        return (await screen(stores, redisQueue(redis.url), wholeCatalogue())).took_s;
      });
    } finally {
      await worker.stop();
      await redis.stop();
    }
  });
}
