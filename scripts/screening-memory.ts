/**
 * Memory and turns of the main thread over a screening whose pairings are all stored already: a million of them must take no more memory
 * than ten thousand, and must not hold other requests up.
 */
import { monitorEventLoopDelay } from 'node:perf_hooks';
import type { RecordDatabase } from '../db/record.ts';
import type { Stores } from '../db/stores.ts';
import { MODEL_VERSION } from '../model/index.ts';
import type { JudgingQueue } from '../server/queue/judging-queue.ts';
import { fingerprintTemplate } from '../server/screenings/fingerprint-template.ts';
import { frameOf } from '../server/screenings/screening-frame.ts';
import { figure } from './bench-figures.ts';
import { guestHouseDimmer, guestHouseLamp } from './guest-house-lists.ts';
import { fillCatalogue, screen, wholeCatalogue, withRecord } from './screening-bench-parts.ts';

/** ms between two looks at the memory */
const LOOK = 200;

export async function measureMemory(pairings: number): Promise<void> {
  console.log('\nMemory over a screening of what is stored already');
  for (const size of [pairings / 100, pairings]) await overStored(Math.round(Math.sqrt(size)));
}

async function overStored(side: number): Promise<void> {
  await withRecord(async (record, stores) => {
    const lamps = Array.from({ length: side }, (_, index) => guestHouseLamp(index));
    const dimmers = Array.from({ length: side }, (_, index) => guestHouseDimmer(index));
    fillCatalogue(stores, lamps, dimmers);
    const distinct = storeVerdicts(record, stores, lamps, dimmers);
    globalThis.gc?.();
    const looks: number[] = [];
    const timer = setInterval(() => looks.push(process.memoryUsage.rss()), LOOK);
    const delay = monitorEventLoopDelay({ resolution: 5 });
    delay.enable();
    const { took_s, stored } = await screen(stores, NOTHING_TO_JUDGE, wholeCatalogue());
    delay.disable();
    clearInterval(timer);
    if (stored !== side * side) throw new Error(`${stored} of ${side * side} were found stored.`);
    const third = Math.max(1, Math.floor(looks.length / 3));
    const peak = (from: number, to: number) => `${figure(Math.max(...looks.slice(from, to), 0) / 2 ** 20)} MiB`;
    console.log(
      `  ${figure(side * side)} pairings, ${figure(distinct)} distinct, in ${figure(took_s)} s: ${figure((side * side) / took_s)} a second`,
    );
    console.log(
      `    memory at its peak: first third ${peak(0, third)}, second ${peak(third, 2 * third)}, last ${peak(2 * third, looks.length)}`,
    );
    console.log(
      `    a turn of the main thread: ${figure(delay.percentile(50) / 1e6)} ms in the middle, ${figure(delay.percentile(99) / 1e6)} ms at p99, ${figure(delay.max / 1e6)} ms at most`,
    );
  });
}

/** Rows of the least length under the fingerprints that the screening will ask for. */
function storeVerdicts(
  record: RecordDatabase,
  { verdicts }: Stores,
  lamps: readonly ReturnType<typeof guestHouseLamp>[],
  dimmers: readonly ReturnType<typeof guestHouseDimmer>[],
): number {
  const template = fingerprintTemplate(frameOf(wholeCatalogue()), MODEL_VERSION);
  const lampParts = lamps.map(template.completeLamp);
  const dimmerParts = dimmers.map(template.completeDimmer);
  const insert = record.prepare(
    `INSERT INTO verdicts (id, fingerprint, model_version, created_at, grade, summary, mains_voltage, mains_frequency, lamp_count)
     VALUES (?, ?, ?, ?, 'suitable', 'Made by the bench.', 230, 50, 1) ON CONFLICT (fingerprint) DO NOTHING`,
  );
  const at = Date.now();
  record.transaction(() => {
    for (const lamp of lampParts) {
      for (const dimmer of dimmerParts) {
        const fingerprint = template.fingerprint(lamp, dimmer, 1);
        insert.run(fingerprint.slice(0, 26), Buffer.from(fingerprint, 'hex'), MODEL_VERSION, at);
      }
    }
  })();
  return verdicts.count();
}

const NOTHING_TO_JUDGE: JudgingQueue = {
  chunksAtOnce: 1,
  judge: async () => {
    throw new Error('Everything was to be stored.');
  },
  forget: async () => undefined,
  breadth: async () => 1,
  waitingFor: async () => undefined,
  close: async () => undefined,
};
