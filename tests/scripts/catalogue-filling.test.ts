import { describe, expect, it } from 'vitest';
import { catalogueFor, fillRecord, realVerdicts, verdictIdOf } from '../../scripts/catalogue-filling.ts';
import { QUERIES } from '../../scripts/catalogue-queries.ts';
import { testApp } from '../support/server-app.ts';

const ROWS = 400;

describe('the record that the catalogue is measured on', () => {
  it('is one that the service reads, and every query that is measured answers from it', async () => {
    const { app, record, get, verdicts } = await testApp();
    const real = await realVerdicts();
    expect(real.length).toBeGreaterThan(9);
    fillRecord(record, ROWS, real, () => undefined);
    expect(verdicts.count()).toBe(ROWS);
    expect((await get(`/v1/verdicts/${verdictIdOf(ROWS - 1)}`)).json().dial).toHaveLength(42);

    const { dimmers, lamps, counts } = catalogueFor(ROWS);
    expect(dimmers * lamps * counts).toBeGreaterThanOrEqual(ROWS);
    const seen = { listed: 0, stale: (await get('/v1/verdicts?stale=true')).json().items.length };
    for (const { name, ask } of QUERIES) {
      const { path, body, accept = 'application/json' } = ask(ROWS);
      const answer =
        body === undefined ? await get(path, { accept }) : await app.inject({ method: 'POST', url: path, payload: body as object });
      expect([name, answer.statusCode]).toEqual([name, 200]);
      if (path.startsWith('/v1/verdicts?') && accept === 'application/json') seen.listed += answer.json().items.length;
    }
    expect([seen.listed, seen.stale].every((found) => found > 0)).toBe(true);
  });
});
