/** Builds the application for a test on a record of its own, with the simulation the test chooses, and closes it afterwards. */
import pino from 'pino';
import { onTestFinished } from 'vitest';
import { isRecordReadable, type RecordDatabase } from '../../db/record.ts';
import { type Stores, storesOf } from '../../db/stores.ts';
import { type App, type AppDependencies, buildApp } from '../../server/app.ts';
import { IMPORT_LIMITS } from '../../server/imports/import-limits.ts';
import type { JudgingQueue } from '../../server/queue/judging-queue.ts';
import { screeningService } from '../../server/screenings/screening-service.ts';
import { directSimulation } from '../../server/simulation/direct-simulation.ts';
import { FIXED_NOW, temporaryRecord } from './server-temporary-record.ts';

export interface TestApp extends Stores {
  readonly app: App;
  readonly record: RecordDatabase;
  readonly post: (body: unknown) => ReturnType<typeof postJson>;
  readonly get: (url: string, headers?: { readonly [name: string]: string }) => ReturnType<typeof getUrl>;
  /** what the application logged, a line an entry */
  readonly logged: readonly string[];
}

/** Screenings that are asked for stay queued, unless a queue is given that judges them. */
export async function testApp(changes: Partial<AppDependencies> = {}, queue?: JudgingQueue): Promise<TestApp> {
  const record = temporaryRecord();
  const stores = storesOf(record);
  const logged: string[] = [];
  const logger = pino({ level: 'info' }, { write: (line: string) => void logged.push(line) });
  const screening = screeningService({ stores, queue: queue ?? NO_QUEUE, now: () => FIXED_NOW, logger });
  if (queue !== undefined) screening.screenings.start();
  const app = await buildApp({
    logger,
    simulation: directSimulation,
    ...stores,
    importLimits: IMPORT_LIMITS,
    screening,
    isRecordReadable: () => isRecordReadable(record),
    simulationLoad: () => ({ threads: 1, waiting: 0, completed: 0 }),
    now: () => FIXED_NOW,
    ...changes,
  });
  onTestFinished(async () => {
    await Promise.all([app.close(), screening.screenings.stop()]);
  });
  return {
    app,
    record,
    ...stores,
    logged,
    post: (body) => postJson(app, body),
    get: (url, headers = {}) => getUrl(app, url, headers),
  };
}

/** Judges nothing: for tests that are not about screenings. */
const NO_QUEUE: JudgingQueue = {
  chunksAtOnce: 1,
  judge: async () => ({ kind: 'stopped' }),
  forget: async () => undefined,
  breadth: async () => 1,
  waitingFor: async () => undefined,
  close: async () => undefined,
};

/** Listens on the loopback address, and gives the port that was free. */
export async function listenOnAnyPort(app: App): Promise<number> {
  return Number(new URL(await app.listen({ port: 0, host: '127.0.0.1' })).port);
}

function postJson(app: App, body: unknown) {
  const payload = typeof body === 'string' ? body : JSON.stringify(body);
  return app.inject({ method: 'POST', url: '/v1/verdicts', headers: { 'content-type': 'application/json' }, payload });
}

function getUrl(app: App, url: string, headers: { readonly [name: string]: string }) {
  return app.inject({ method: 'GET', url, headers });
}
