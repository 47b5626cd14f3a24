import { describe, expect, it } from 'vitest';
import { testApp } from '../support/server-app.ts';
import { fakeSimulation } from '../support/server-fake-simulation.ts';
import { briefPairing, examplePairing } from '../support/server-pairings.ts';

describe('GET /v1/verdicts/{id}/waveforms', () => {
  it('gives columns of equal length over whole half-cycles of the judged position', async () => {
    const { post, get } = await testApp();
    const { id } = (await post(briefPairing())).json();
    const answer = await get(`/v1/verdicts/${id}/waveforms?dial_pct=60`);
    expect(answer.statusCode).toBe(200);
    const { verdictId, sweep, dial_pct, columns } = answer.json();
    expect({ verdictId, sweep, dial_pct }).toEqual({ verdictId: id, sweep: 'up', dial_pct: 60 });
    const lengths = Object.values<number[]>(columns).map(({ length }) => length);
    expect(new Set(lengths).size).toBe(1);
    expect(lengths[0]).toBeGreaterThan(100);
    expect(columns.time_ms.toSorted((a: number, b: number) => a - b)).toEqual(columns.time_ms);
    // crest of 230 V
    expect(Math.max(...columns.mainsVoltage_V)).toBeGreaterThan(320);
    expect(Math.max(...columns.mainsVoltage_V)).toBeLessThanOrEqual(325.3);
  });

  it('gives the same columns as CSV where the client prefers that', async () => {
    const { post, get } = await testApp({ simulation: fakeSimulation() });
    const { id } = (await post(examplePairing())).json();
    const url = `/v1/verdicts/${id}/waveforms?dial_pct=50&sweep=down`;
    const answer = await get(url, { accept: 'text/csv' });
    expect(answer.headers['content-type']).toMatch(/^text\/csv/);
    expect(answer.headers['content-disposition']).toBe(`attachment; filename="waveforms-${id}-down-50.csv"`);
    expect(answer.body).toBe(
      'time_ms,mainsVoltage_V,lampVoltage_V,lampCurrent_mA,dimmerCurrent_mA,timingVoltage_V,gateCurrent_mA\r\n0,1,2,3000,4000,5,6000\r\n1,1.5,2.5,3500,4500,5.5,6500\r\n',
    );
    const { columns } = (await get(url, { accept: 'application/json, text/csv;q=0.5' })).json();
    expect(Object.keys(columns).join(',')).toBe(answer.body.split('\r\n')[0]);
    expect(columns.lampCurrent_mA).toEqual([3000, 3500]);
    expect(answer.headers.vary).toMatch(/accept/);
  });

  it('answers 406 to a client that takes neither', async () => {
    const { get } = await testApp();
    const answer = await get(`/v1/verdicts/${'0'.repeat(26)}/waveforms?dial_pct=50`, { accept: 'image/png' });
    expect([answer.statusCode, answer.json().type]).toEqual([406, 'urn:holdfast:problem:not-acceptable']);
  });

  it('answers 404 where no verdict is stored', async () => {
    const { get } = await testApp();
    const answer = await get(`/v1/verdicts/${'0'.repeat(26)}/waveforms?dial_pct=50`);
    expect([answer.statusCode, answer.json().type]).toEqual([404, 'urn:holdfast:problem:verdict-not-found']);
  });

  it('refuses a dial position that was not judged, and names those that were', async () => {
    const { post, get } = await testApp({ simulation: fakeSimulation() });
    const { id } = (await post(examplePairing())).json();
    const answer = await get(`/v1/verdicts/${id}/waveforms?dial_pct=52`);
    expect(answer.statusCode).toBe(400);
    expect(answer.json().issues).toEqual([{ path: 'dial_pct', message: expect.stringMatching(/judged at: 0, 5, .*, 100$/) }]);
  });

  it('refuses the way down of a verdict that has none', async () => {
    const { post, get } = await testApp({ simulation: fakeSimulation() });
    const { id } = (await post(briefPairing())).json();
    const answer = await get(`/v1/verdicts/${id}/waveforms?dial_pct=60&sweep=down`);
    expect(answer.json().issues).toEqual([{ path: 'sweep', message: expect.stringMatching(/must be "up"/) }]);
  });
});
