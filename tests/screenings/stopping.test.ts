import { readdirSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { startService } from '../../scripts/service-process.ts';
import { cheapScreening, dimmerEntryOf, lampEntryOf } from '../support/screening-catalogue.ts';
import type { Loose } from '../support/server-pairings.ts';
import { temporaryFolder } from '../support/server-temporary-record.ts';

const PATIENCE = { timeout: 120_000, interval: 100 };

async function send(method: string, url: string, body?: unknown): Promise<Loose> {
  const sent = body === undefined ? {} : { headers: { 'content-type': 'application/json' }, body: JSON.stringify(body) };
  const answer = await fetch(url, { method, ...sent });
  expect(answer.ok).toBe(true);
  return answer.json();
}

describe('a service that is told to stop while it screens', () => {
  it('writes down what runs, ends with 0, leaves one whole record, and goes on at the next start', { timeout: 300_000 }, async () => {
    const folder = temporaryFolder();
    const first = await startService(folder);
    for (let index = 0; index < 12; index += 1) {
      await send('PUT', `${first.address}/v1/lamps/lamp-${index}`, lampEntryOf(index));
      await send('PUT', `${first.address}/v1/dimmers/dimmer-${index}`, dimmerEntryOf(index));
    }
    const { id } = await send('POST', `${first.address}/v1/screenings`, cheapScreening());
    await expect.poll(async () => (await send('GET', `${first.address}/v1/screenings/${id}`)).counts.done, PATIENCE).toBeGreaterThan(0);
    expect(await first.stop()).toBe(0);
    expect(readdirSync(folder)).toEqual(['holdfast.sqlite']);

    const second = await startService(folder);
    const before = await send('GET', `${second.address}/v1/screenings/${id}`);
    expect(before.state).toMatch(/^(running|finished)$/);
    expect(before.counts.done).toBeGreaterThan(0);
    await expect.poll(async () => (await send('GET', `${second.address}/v1/screenings/${id}`)).state, PATIENCE).toBe('finished');
    const after = await send('GET', `${second.address}/v1/screenings/${id}`);
    expect(after.counts).toEqual({ total: 144, stored: 0, done: 144, failed: 0, toGo: 0 });
    expect(await second.stop()).toBe(0);
  });
});
