import { describe, expect, it, onTestFinished } from 'vitest';
import { askedPairing } from '../../server/schemas/pairing.ts';
import { startSimulationPool } from '../../server/simulation/simulation-pool.ts';
import { completePairing } from '../../server/verdicts/pairing-completion.ts';
import { toModel } from '../../server/verdicts/pairing-to-model.ts';
import { testApp } from '../support/server-app.ts';
import { briefPairing, examplePairing, type Loose } from '../support/server-pairings.ts';

function pool(queueLimit: number) {
  const started = startSimulationPool({ threads: 1, queueLimit });
  onTestFinished(() => started.destroy());
  return started;
}

function inModel(pairing: Loose) {
  const completion = completePairing(askedPairing.parse(pairing));
  return toModel(completion);
}

describe('the simulation pool', () => {
  it('leaves the main thread free: the service says that it is live while a pairing is judged', async () => {
    const simulation = pool(8);
    const { post, get } = await testApp({ simulation, simulationLoad: simulation.load });
    const order: string[] = [];
    const judging = post(examplePairing()).then((answer) => {
      order.push('judged');
      return answer;
    });
    const live = await get('/health/live');
    order.push('live');
    expect(live.json()).toEqual({ status: 'live' });
    expect((await judging).statusCode).toBe(201);
    expect(order).toEqual(['live', 'judged']);
    expect((await get('/metrics')).body).toMatch(/^holdfast_simulations_completed 1$/m);
  });

  it('refuses what does not fit in the queue, with a time to ask again, and does the rest', async () => {
    const simulation = pool(2);
    const { pairing, options } = inModel(briefPairing());
    const outcomes = await Promise.all(Array.from({ length: 5 }, () => simulation.judge(pairing, options)));
    const refused = outcomes.flatMap((outcome) => (outcome.ok ? [] : [outcome.failure]));
    expect(outcomes.length - refused.length).toBeGreaterThanOrEqual(2);
    expect(refused.length).toBeGreaterThanOrEqual(2);
    for (const failure of refused) {
      expect(failure.kind).toBe('queue-full');
      expect(failure.kind === 'queue-full' && failure.retryAfter_s).toBeGreaterThanOrEqual(1);
      expect(failure.kind === 'queue-full' && failure.retryAfter_s).toBeLessThanOrEqual(60);
    }
    expect((await simulation.judge(pairing, options)).ok).toBe(true);
  });

  it('answers different questions asked at once with 503 and Retry-After where the queue is full', async () => {
    const simulation = pool(1);
    const { post, verdicts } = await testApp({ simulation });
    const answers = await Promise.all(
      Array.from({ length: 6 }, (_, index) => post({ ...briefPairing(), options: { dialPositions_pct: [50 + index] } })),
    );
    const full = answers.filter(({ statusCode }) => statusCode === 503);
    const judged = answers.filter(({ statusCode }) => statusCode === 201);
    expect(full.length + judged.length).toBe(6);
    expect(full.length).toBeGreaterThanOrEqual(1);
    expect(full.every(({ headers }) => Number(headers['retry-after']) >= 1)).toBe(true);
    expect(verdicts.count()).toBe(judged.length);
  });

  it('lets what runs and waits finish when it is closed', async () => {
    const simulation = pool(8);
    const { pairing, options } = inModel(briefPairing());
    const asked = [simulation.judge(pairing, options), simulation.judge(pairing, options)];
    await simulation.close();
    expect((await Promise.all(asked)).map(({ ok }) => ok)).toEqual([true, true]);
  });
});
