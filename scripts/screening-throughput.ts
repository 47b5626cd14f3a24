/**
 * Pairings an hour: the engine called in a bare loop, the embedded threads with one worker and with two, and a worker process over Redis,
 * all on the same pairings, in turns, so that whatever else the machine does meets each of them alike. Processor time stands beside it:
 * it tells more where other work shares the machine.
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
import { processorTime_s } from './load-generator.ts';
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
  const taken: { [way in Way]: Taken[] } = { 'bare loop': [], 'embedded, 1 worker': [], 'embedded, 2 workers': [], 'Redis, 1 worker': [] };
  await judgeInLoop(lampList.slice(0, 1), dimmerList.slice(0, WARM_UP));
  for (let round = 0; round < rounds; round += 1) {
    const note = (way: Way, took: Taken): void => {
      taken[way].push(took);
      console.log(`  round ${round + 1}, ${way}: ${figure(took.wall_s)} s, ${figure(took.processor_s)} s of processors`);
    };
    note('bare loop', await judgeInLoop(lampList, dimmerList));
    note('embedded, 1 worker', await inThreads(1, lampList, dimmerList));
    if (redis) note('Redis, 1 worker', await overRedis(lampList, dimmerList));
    note('embedded, 2 workers', await inThreads(2, lampList, dimmerList));
  }
  const wall = (way: Way) => spreadOf(taken[way].map(({ wall_s }) => wall_s));
  const processor = (way: Way) => spreadOf(taken[way].map(({ processor_s }) => processor_s)).median;
  for (const way of WAYS.filter((each) => taken[each].length > 0)) {
    console.log(`  ${way.padEnd(20)} ${perHour(pairings, wall(way))}, ${figure((processor(way) / pairings) * 1000)} ms of processors each`);
  }
  const over = (way: Way) =>
    `${percent(wall(way).median / wall('bare loop').median)} in time, ${percent(processor(way) / processor('bare loop'))} in processor time`;
  const scaling = wall('embedded, 1 worker').median / wall('embedded, 2 workers').median;
  console.log(`  from 1 to 2 workers: ${figure(scaling)} times (at least 1.8 is asked for)`);
  console.log(`  the embedded threads over the bare loop: ${over('embedded, 1 worker')} (at most 10 %)`);
  if (redis) console.log(`  Redis over the bare loop: ${over('Redis, 1 worker')} (at most 15 %)`);
}

interface Taken {
  readonly wall_s: number;
  /** of every process that takes part, but Redis itself */
  readonly processor_s: number;
}

async function timed(act: () => Promise<void> | void, otherProcess?: number): Promise<Taken> {
  const other = () => (otherProcess === undefined ? 0 : processorTime_s(otherProcess));
  const [began, own, others] = [performance.now(), process.cpuUsage(), other()];
  await act();
  const { user, system } = process.cpuUsage(own);
  return { wall_s: (performance.now() - began) / 1000, processor_s: (user + system) / 1e6 + other() - others };
}

function perHour(pairings: number, { median, least, most }: Spread): string {
  const [slow, middle, fast] = [most, median, least].map((seconds) => figure((pairings * 3600) / seconds));
  return `${middle} pairings an hour (${slow} to ${fast})`;
}

function percent(ratio: number): string {
  return `${((ratio - 1) * 100).toFixed(1)} %`;
}

function judgeInLoop(lamps: readonly AskedLamp[], dimmers: readonly AskedDimmer[]): Promise<Taken> {
  const { mains } = wholeCatalogue();
  return timed(() => {
    for (const lamp of lamps) {
      for (const dimmer of dimmers) {
        const { pairing, options } = toModel(completePairing({ mains, dimmer, lamps: [{ count: 1, lamp }] }));
        if (!judgeAsked(pairing, options).ok) throw new Error('The model refuses a pairing of the bench.');
      }
    }
  });
}

async function inThreads(threads: number, lamps: readonly AskedLamp[], dimmers: readonly AskedDimmer[]): Promise<Taken> {
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
      return timed(async () => void (await screen(stores, embeddedQueue(pool, threads), wholeCatalogue())));
    });
  } finally {
    await pool.destroy();
  }
}

async function overRedis(lamps: readonly AskedLamp[], dimmers: readonly AskedDimmer[]): Promise<Taken> {
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
        return timed(async () => void (await screen(stores, redisQueue(redis.url), wholeCatalogue())), worker.pid);
      });
    } finally {
      await worker.stop();
      await redis.stop();
    }
  });
}
