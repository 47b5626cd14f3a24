/** Counts answered requests, and the time they took, by route pattern. */
import type { App } from '../app.ts';
import type { Metrics } from '../metrics.ts';

export type CountRequest = (method: string, route: string, status: number, seconds: number) => void;

/** Counts what the application answers; what is answered without it is to be counted by what this returns. */
export function countRequests(app: App, metrics: Metrics): CountRequest {
  const answered = metrics.counter('holdfast_http_requests_total', 'Requests answered, by method, route and status.');
  const seconds = metrics.counter('holdfast_http_request_seconds_total', 'Time from request to answer, summed, by method and route.');
  const counters = new Map<string, (seconds: number) => void>();
  const counterOf = (method: string, route: string, status: number) => {
    const one = answered.under({ method, route, status });
    const time = seconds.under({ method, route });
    return (taken: number) => {
      one();
      time(taken);
    };
  };
  const count: CountRequest = (method, route, status, taken) => {
    const key = `${method} ${route} ${status}`;
    const counter = counters.get(key) ?? counterOf(method, route, status);
    counters.set(key, counter);
    counter(taken);
  };
  app.addHook('onResponse', async (request, reply) => {
    count(request.method, request.routeOptions.url ?? 'none', reply.statusCode, reply.elapsedTime / 1000);
  });
  return count;
}
