/** Counts answered requests, and the time they took, by route pattern. */
import type { App } from '../app.ts';
import type { Metrics } from '../metrics.ts';

export function countRequests(app: App, metrics: Metrics): void {
  const answered = metrics.counter('holdfast_http_requests_total', 'Requests answered, by method, route and status.');
  const seconds = metrics.counter('holdfast_http_request_seconds_total', 'Time from request to answer, summed, by method and route.');
  app.addHook('onResponse', async (request, reply) => {
    const route = request.routeOptions.url ?? 'none';
    answered.add({ method: request.method, route, status: reply.statusCode });
    seconds.add({ method: request.method, route }, reply.elapsedTime / 1000);
  });
}
