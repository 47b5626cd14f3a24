/** Screenings on a record, with the queue a test chooses; stopped when the test ends. */
import pino from 'pino';
import { onTestFinished } from 'vitest';
import type { RecordDatabase } from '../../db/record.ts';
import { storesOf } from '../../db/stores.ts';
import type { JudgingQueue } from '../../server/queue/judging-queue.ts';
import type { ScreeningAnswer } from '../../server/schemas/screening.ts';
import { type ResultRow, screeningResults } from '../../server/screenings/screening-results.ts';
import { type ScreeningService, screeningService } from '../../server/screenings/screening-service.ts';

export interface TestScreenings extends ScreeningService {
  /** Resolves when nothing more can be run now. */
  readonly settled: () => Promise<void>;
  readonly results: (id: string) => Promise<readonly ResultRow[]>;
  readonly read: (id: string) => Promise<ScreeningAnswer>;
  readonly stop: () => Promise<void>;
}

export function testScreenings(record: RecordDatabase, queue: JudgingQueue, now: () => Date = () => new Date()): TestScreenings {
  const service = screeningService({ stores: storesOf(record), queue, now, logger: pino({ level: 'silent' }), pace: { retry_ms: 20 } });
  let stopped = false;
  const stop = async (): Promise<void> => {
    if (!stopped) await service.screenings.stop();
    stopped = true;
  };
  onTestFinished(stop);
  service.screenings.start();
  return {
    ...service,
    stop,
    settled: () => service.screenings.idle(),
    read: async (id) => {
      const screening = await service.screenings.read(id);
      if (screening === undefined) throw new Error(`There is no screening ${id}.`);
      return screening;
    },
    results: async (id) => {
      const row = service.stores.screenings.find(id);
      if (row === undefined) throw new Error(`There is no screening ${id}.`);
      const rows: ResultRow[] = [];
      for await (const more of screeningResults(service.stores, row)) rows.push(...more);
      return rows;
    },
  };
}
