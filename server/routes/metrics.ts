/** The service's counters and gauges, for a scraper. */
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import { z } from 'zod';
import type { AppDependencies } from '../app.ts';
import { METRICS_TYPE, type Metrics } from '../metrics.ts';

export function metricsRoute(
  { verdicts, simulationLoad }: Pick<AppDependencies, 'verdicts' | 'simulationLoad'>,
  metrics: Metrics,
): FastifyPluginAsyncZod {
  metrics.gauge('holdfast_stored_verdicts', 'Verdicts in the record.', () => verdicts.count());
  metrics.gauge('holdfast_simulation_threads', 'Threads that simulate.', () => simulationLoad().threads);
  metrics.gauge('holdfast_simulations_waiting', 'Simulations that wait for a thread.', () => simulationLoad().waiting);
  metrics.gauge('holdfast_simulations_completed', 'Simulations completed since the start.', () => simulationLoad().completed);
  metrics.gauge('process_resident_memory_bytes', 'Resident memory of the process.', () => process.memoryUsage.rss());
  metrics.gauge('process_uptime_seconds', 'Time since the process started.', () => process.uptime());

  return async (app) => {
    app.get(
      '/metrics',
      {
        logLevel: 'warn',
        schema: {
          operationId: 'readMetrics',
          tags: ['operations'],
          summary: 'Counters and gauges in the Prometheus text format',
          response: { 200: { description: 'The metrics.', content: { 'text/plain': { schema: z.string() } } } },
        },
      },
      async (_request, reply) => reply.type(METRICS_TYPE).send(metrics.text()),
    );
  };
}
