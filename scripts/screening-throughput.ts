/**
 * Pairings an hour: the engine called in a bare loop, the embedded threads with one worker and with two, and a worker process over Redis,
 * all on the same pairings, in turns, so that whatever else the machine does meets each of them alike. Every thread lives through all
 * rounds, and the first round is not counted: each way is measured compiled, as it runs for most of a night.
 */
import { embeddedQueue } from '../server/queue/embedded-queue.ts';
import { redisQueue } from '../server/queue/redis-queue.ts';
import type { AskedDimmer, AskedLamp } from '../server/schemas/pairing.ts';
import { judgeAsked } from '../server/simulation/asked-judging.ts';
import { type SimulationPool, startSimulationPool } from '../server/simulation/simulation-pool.ts';
import { completePairing } from '../server/verdicts/pairing-completion.ts';
import { toModel } from '../server/verdicts/pairing-to-model.ts';
import { figure, type Spread, spreadOf } from './bench-figures.ts';
import { guestHouseDimmer, guestHouseLamp } from './guest-house-lists.ts';
import { processorTime_s } from './load-generator.ts';
import {
  fillCatalogue,
  inTemporaryFolder,
  type Service,
  screen,
  startRedis,
  startWorker,
  wholeCatalogue,
  withRecord,
} from './screening-bench-parts.ts';

export interface ThroughputSize {
  readonly lamps: number;
  readonly dimmers: number;
  readonly rounds: number;
  readonly redis: boolean;
}

interface Lists {
  readonly lamps: readonly AskedLamp[];
  readonly dimmers: readonly AskedDimmer[];
}

/** One turn of a way. */
interface Taken {
  readonly wall_s: number;
  /** of every process that takes part, but Redis itself */
  readonly processor_s: number;
}

interface Way {
  readonly name: string;
  readonly turn: () => Promise<Taken>;
  /** of each counted round */
  readonly taken: Taken[];
}

/** of the 500 lamps and 40 dimmers: far apart, so that a few of them are like all */
const LAMP_STEP = 61;
const DIMMER_STEP = 7;

export async function measureThroughput({ lamps, dimmers, rounds, redis }: ThroughputSize): Promise<void> {
  const lists = {
    lamps: Array.from({ length: lamps }, (_, index) => guestHouseLamp((index * LAMP_STEP) % 500)),
    dimmers: Array.from({ length: dimmers }, (_, index) => guestHouseDimmer((index * DIMMER_STEP) % 40)),
  };
  console.log(`\nThroughput: ${lamps} lamps x ${dimmers} dimmers, whole dial, all corners, ${rounds} rounds after one to warm up`);
  await inTemporaryFolder(async (folder) => {
    const pools = [1, 2].map((threads) => startSimulationPool({ threads, queueLimit: 1 })) as [SimulationPool, SimulationPool];
    const started: Service[] = [];
    try {
      const way = (name: string, turn: () => Promise<Taken>): Way => ({ name, turn, taken: [] });
      const bare = way('bare loop', () => timed(() => judgeInLoop(lists)));
      const one = way('embedded, 1 worker', () => inThreads(pools[0], 1, lists));
      const two = way('embedded, 2 workers', () => inThreads(pools[1], 2, lists));
      const ways = [bare, one, two];
      if (redis) {
        const server = await startRedis(folder);
        started.push(server);
        const worker = await startWorker(server.url, 1);
        started.unshift(worker);
        ways.splice(
          2,
          0,
          way('Redis, 1 worker', () => overRedis(worker, lists)),
        );
      }
      await takeTurns(ways, rounds);
      tell(ways, lamps * dimmers);
      tellScaling(one, two);
      tellOverhead(one, bare, 'at most 10 % is asked for');
      const overQueue = ways.find(({ name }) => name.startsWith('Redis'));
      if (overQueue === undefined) return;
      tellOverhead(overQueue, bare, 'at most 15 % is asked for');
      tellOverhead(overQueue, one, 'the queue itself; at most 5 % is asked for');
    } finally {
      for (const service of started) await service.stop();
      for (const pool of pools) await pool.destroy();
    }
  });
}

async function takeTurns(ways: readonly Way[], rounds: number): Promise<void> {
  for (let round = 0; round <= rounds; round += 1) {
    for (const { name, turn, taken } of ways) {
      const took = await turn();
      if (round > 0) taken.push(took);
      console.log(
        `  ${round === 0 ? 'warming up' : `round ${round}`}, ${name}: ${figure(took.wall_s)} s, ${figure(took.processor_s)} s of processors`,
      );
    }
  }
}

function tell(ways: readonly Way[], pairings: number): void {
  for (const { name, taken } of ways) {
    const { median, least, most } = spreadOf(taken.map(({ wall_s }) => wall_s));
    const [slow, middle, fast] = [most, median, least].map((seconds) => figure((pairings * 3600) / seconds));
    const processor_ms = (spreadOf(taken.map(({ processor_s }) => processor_s)).median / pairings) * 1000;
    console.log(`  ${name.padEnd(20)} ${middle} pairings an hour (${slow} to ${fast}), ${figure(processor_ms)} ms of processors each`);
  }
}

function tellScaling(one: Way, two: Way): void {
  const { median } = ratios(one, two, 'wall_s');
  const best = leastOf(one, 'wall_s') / leastOf(two, 'wall_s');
  console.log(`  from 1 to 2 workers: ${figure(median)} times, ${figure(best)} by the best round of each (at least 1.8 is asked for)`);
}

/** Where others share the machine, processor time tells more than time, and the best rounds more than the middle ones. */
function tellOverhead(way: Way, against: Way, wanted: string): void {
  const told = (['wall_s', 'processor_s'] as const).map((kind) => {
    const best = leastOf(way, kind) / leastOf(against, kind);
    return `${percent(ratios(way, against, kind).median)} (${percent(best)} by the best rounds) in ${kind === 'wall_s' ? 'time' : 'processor time'}`;
  });
  console.log(`  ${way.name} over ${against.name}: ${told.join(', ')}; ${wanted}`);
}

function ratios(way: Way, against: Way, kind: keyof Taken): Spread {
  return spreadOf(way.taken.map((took, round) => took[kind] / (against.taken[round]?.[kind] ?? Number.NaN)));
}

function leastOf({ taken }: Way, kind: keyof Taken): number {
  return spreadOf(taken.map((took) => took[kind])).least;
}

function percent(ratio: number): string {
  return `${((ratio - 1) * 100).toFixed(1)} %`;
}

async function timed(act: () => Promise<void> | void, otherProcess?: number): Promise<Taken> {
  const other = () => (otherProcess === undefined ? 0 : processorTime_s(otherProcess));
  const [began, own, others] = [performance.now(), process.cpuUsage(), other()];
  await act();
  const { user, system } = process.cpuUsage(own);
  return { wall_s: (performance.now() - began) / 1000, processor_s: (user + system) / 1e6 + other() - others };
}

function judgeInLoop({ lamps, dimmers }: Lists): void {
  const { mains } = wholeCatalogue();
  for (const lamp of lamps) {
    for (const dimmer of dimmers) {
      const { pairing, options } = toModel(completePairing({ mains, dimmer, lamps: [{ count: 1, lamp }] }));
      if (!judgeAsked(pairing, options).ok) throw new Error('The model refuses a pairing of the bench.');
    }
  }
}

function inThreads(pool: SimulationPool, threads: number, { lamps, dimmers }: Lists): Promise<Taken> {
  return withRecord(async (_, stores) => {
    fillCatalogue(stores, lamps, dimmers);
    return timed(async () => void (await screen(stores, embeddedQueue(pool, threads), wholeCatalogue())));
  });
}

function overRedis({ url, pid }: Service, { lamps, dimmers }: Lists): Promise<Taken> {
  return withRecord(async (_, stores) => {
    fillCatalogue(stores, lamps, dimmers);
    return timed(async () => void (await screen(stores, redisQueue(url), wholeCatalogue())), pid);
  });
}
