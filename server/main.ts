/** The process: environment, record, threads, HTTP, and the sequence in which they stop. */
import { join } from 'node:path';
import { setFlagsFromString } from 'node:v8';
import closeWithGrace from 'close-with-grace';
import pino from 'pino';
import { closeRecord, isRecordReadable, openRecord } from '../db/record.ts';
import { storesOf } from '../db/stores.ts';
import { buildApp } from './app.ts';
import { type Environment, parseEnvironment, printable } from './environment.ts';
import { IMPORT_LIMITS } from './imports/import-limits.ts';
import { resumeImports } from './imports/importing.ts';
import { judgingQueue } from './queue/engine-choice.ts';
import { startDailyRescreening } from './screenings/daily-rescreening.ts';
import { screeningService } from './screenings/screening-service.ts';
import { runStopStages, type StopStage } from './shutdown.ts';
import { startSimulationPool } from './simulation/simulation-pool.ts';
import { keepTickShape } from './tick-shape.ts';

/** ms for what comes after the running requests: ending threads, writing the log of the record back */
const SHORT_STAGE = 5_000;
/** % of what is alive by which a heap grows before it is collected; V8 by itself lets it grow several times over, which importing fills */
const HEAP_GROWTH = 50;

keepTickShape();
// Read at each collection and not only at the start, so it may be set here, for whoever starts this file in whatever way.
setFlagsFromString(`--heap-growing-percent=${HEAP_GROWTH}`);

const parsed = parseEnvironment(process.env);
if (parsed.ok) {
  await start(parsed.environment);
} else {
  for (const problem of parsed.problems) console.error(problem);
  console.error('The service did not start. .env.example documents every variable.');
  process.exitCode = 1;
}

async function start(environment: Environment): Promise<void> {
  const logger = pino({ level: environment.logLevel });
  const now = () => new Date();
  try {
    const record = openRecord(join(environment.dataFolder, 'holdfast.sqlite'), now);
    const stores = storesOf(record);
    const resumed = await resumeImports({ entries: stores.entries, staging: stores.importStaging, now });
    if (resumed > 0) logger.info({ imports: resumed }, 'finished imports that an earlier process had taken in');
    const simulation = startSimulationPool({
      threads: environment.workers,
      queueLimit: environment.queueLimit,
      backgroundDeadline_s: environment.pairingDeadline_s,
    });
    const queue = await judgingQueue(environment, simulation);
    const screening = screeningService({ stores, queue, now, logger });
    const app = await buildApp({
      logger,
      simulation,
      ...stores,
      importLimits: IMPORT_LIMITS,
      screening,
      isRecordReadable: () => isRecordReadable(record),
      simulationLoad: simulation.load,
      now,
    });
    stopOnSignal(environment.stopDeadline_s, logger, [
      // Stops listening, refuses what still arrives, waits for what runs, requests and screened pairings alike; each answer closes its
      // connection. A pairing that takes longer is judged again at the next start.
      {
        name: 'finish what runs',
        deadline_ms: environment.stopDeadline_s * 1000,
        act: async () => void (await Promise.all([app.close(), screening.screenings.stop()])),
      },
      { name: 'end simulation threads', deadline_ms: SHORT_STAGE, act: simulation.close, orElse: simulation.destroy },
      { name: 'check the record in and close it', deadline_ms: SHORT_STAGE, act: () => closeRecord(record) },
    ]);
    const address = await app.listen({ host: environment.host, port: environment.port });
    screening.screenings.start();
    const at = environment.dailyRescreening;
    if (at !== undefined) startDailyRescreening({ at, now, ask: screening.screenings.askStale, logger });
    logger.info({ ...printable(environment), address, reference: `${address}/docs` }, 'serving');
  } catch (error) {
    logger.fatal({ err: error }, 'the service did not start');
    // A silent log is no reason to end without a word.
    if (environment.logLevel === 'silent') console.error(`The service did not start: ${error instanceof Error ? error.message : error}`);
    process.exitCode = 1;
    // Threads and timers may be up already.
    logger.flush();
    process.exit();
  }
}

function stopOnSignal(stopDeadline_s: number, logger: pino.Logger, stages: readonly StopStage[]): void {
  const delay = stopDeadline_s * 1000 + stages.length * SHORT_STAGE;
  closeWithGrace({ delay, logger }, async ({ signal, err }) => {
    if (err !== undefined) logger.fatal({ err }, 'stopping after an unexpected error');
    else logger.info({ signal }, 'stopping');
    const clean = await runStopStages(stages, logger);
    logger.info({ clean }, 'stopped');
  });
}
