/**
 * The worker process: judges what a service puts into Redis. It needs no record and no port, only HOLDFAST_REDIS_URL; any number of them
 * may run, on any machines, and each may be killed at any time.
 */
import closeWithGrace from 'close-with-grace';
import pino from 'pino';
import { MODEL_VERSION } from '../model/index.ts';
import { parseEnvironment } from './environment.ts';
import { startRedisWorker } from './queue/redis-worker.ts';
import { runStopStages } from './shutdown.ts';
import { startSimulationPool } from './simulation/simulation-pool.ts';

/** ms for what comes after the running pairings */
const SHORT_STAGE = 5_000;

const parsed = parseEnvironment(process.env);
if (!parsed.ok || parsed.environment.redisUrl === undefined) {
  for (const problem of parsed.ok ? ['HOLDFAST_REDIS_URL must be set: a worker has its work from there.'] : parsed.problems) {
    console.error(problem);
  }
  console.error('The worker did not start. .env.example documents every variable.');
  process.exitCode = 1;
} else {
  const { redisUrl, workers: threads, queueLimit, stopDeadline_s, logLevel, pairingDeadline_s, chunkLock_s } = parsed.environment;
  const logger = pino({ level: logLevel });
  const simulation = startSimulationPool({ threads, queueLimit, backgroundDeadline_s: pairingDeadline_s });
  const worker = startRedisWorker({ url: redisUrl, simulation, threads, lock_s: chunkLock_s, logger });
  const stages = [
    { name: 'finish running pairings', deadline_ms: stopDeadline_s * 1000, act: worker.close },
    { name: 'end simulation threads', deadline_ms: SHORT_STAGE, act: simulation.close, orElse: simulation.destroy },
  ];
  closeWithGrace({ delay: stopDeadline_s * 1000 + stages.length * SHORT_STAGE, logger }, async ({ signal, err }) => {
    if (err !== undefined) logger.fatal({ err }, 'stopping after an unexpected error');
    else logger.info({ signal }, 'stopping');
    logger.info({ clean: await runStopStages(stages, logger) }, 'stopped');
  });
  logger.info({ modelVersion: MODEL_VERSION, threads }, 'judging');
}
