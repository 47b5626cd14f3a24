import { describe, expect, it } from 'vitest';
import { createMetrics } from '../../server/metrics.ts';
import { testApp } from '../support/server-app.ts';
import { fakeSimulation } from '../support/server-fake-simulation.ts';
import { examplePairing } from '../support/server-pairings.ts';

describe('metrics', () => {
  it('are written in the text format, with labels escaped', () => {
    const metrics = createMetrics();
    const counter = metrics.counter('c_total', 'Counted.');
    counter.add({ a: 'x"y\\z\n' });
    counter.add({ a: 'x"y\\z\n' }, 2);
    counter.add();
    metrics.gauge('g', 'Gauged.', () => 1.5);
    expect(metrics.text()).toBe(
      '# HELP c_total Counted.\n# TYPE c_total counter\nc_total{a="x\\"y\\\\z\\n"} 3\nc_total 1\n# HELP g Gauged.\n# TYPE g gauge\ng 1.5\n',
    );
  });

  it('count requests by route pattern and verdicts by where they came from', async () => {
    const { post, get } = await testApp({ simulation: fakeSimulation() });
    const { id } = (await post(examplePairing())).json();
    await post(examplePairing());
    await get(`/v1/verdicts/${id}`);
    await get('/somewhere/else');
    const answer = await get('/metrics');
    expect(answer.headers['content-type']).toBe('text/plain; version=0.0.4; charset=utf-8');
    const lines = answer.body.split('\n');
    expect(lines).toEqual(
      expect.arrayContaining([
        'holdfast_http_requests_total{method="POST",route="/v1/verdicts",status="201"} 1',
        'holdfast_http_requests_total{method="POST",route="/v1/verdicts",status="200"} 1',
        'holdfast_http_requests_total{method="GET",route="/v1/verdicts/:id",status="200"} 1',
        'holdfast_http_requests_total{method="GET",route="none",status="404"} 1',
        'holdfast_verdicts_total{source="computed"} 1',
        'holdfast_verdicts_total{source="stored"} 1',
        'holdfast_half_cycles_total 7',
        'holdfast_stored_verdicts 1',
      ]),
    );
    expect(answer.body).not.toContain('somewhere');
  });
});
