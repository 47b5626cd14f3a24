/** Which engine judges screenings: worker processes over Redis where its address is set, and this process's threads where it is not. */
import type { Environment } from '../environment.ts';
import type { BackgroundSimulation } from '../simulation/simulation.ts';
import { embeddedQueue } from './embedded-queue.ts';
import type { JudgingQueue } from './judging-queue.ts';

export async function judgingQueue(
  { redisUrl, workers }: Pick<Environment, 'redisUrl' | 'workers'>,
  simulation: BackgroundSimulation,
): Promise<JudgingQueue> {
  if (redisUrl === undefined) return embeddedQueue(simulation, workers);
  // Loaded only where it is used: without Redis nothing of its client runs.
  const { redisQueue } = await import('./redis-queue.ts');
  return redisQueue(redisUrl);
}
