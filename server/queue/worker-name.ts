/** What a worker is called in Redis, which tells how many pairings it judges at a time. */
import type { Queue } from 'bullmq';

const THREADS = /threads-(\d+)$/;

export function workerName(threads: number): string {
  return `threads-${threads}`;
}

/** Of all workers that are connected; undefined where there is none. */
export async function readBreadth(queue: Pick<Queue, 'getWorkers'>): Promise<number | undefined> {
  const workers = await queue.getWorkers();
  const threads = workers.map(({ rawname }) => Number(THREADS.exec(rawname ?? '')?.[1] ?? 1));
  return threads.length === 0 ? undefined : threads.reduce((sum, each) => sum + each, 0);
}
