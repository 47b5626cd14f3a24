import { describe, expect, it } from 'vitest';
import { MODEL_VERSION } from '../../model/index.ts';
import { testApp } from '../support/server-app.ts';
import { CANNED_REQUIREMENT, fakeSimulation, pending } from '../support/server-fake-simulation.ts';
import { briefPairing, examplePairing } from '../support/server-pairings.ts';

type Bounded = { ok: true; value: typeof CANNED_REQUIREMENT };

/** A simulation that says how often a requirement was asked of it. */
function counting(bound: () => Promise<Bounded> = async () => ({ ok: true, value: CANNED_REQUIREMENT })) {
  let asked = 0;
  const simulation = {
    ...fakeSimulation(),
    boundRequirement: () => {
      asked += 1;
      return bound();
    },
  };
  return { simulation, asked: () => asked };
}

describe('GET /v1/verdicts/{id}/requirement', () => {
  it('is computed when it is first asked for, in the wire’s units, and then kept', async () => {
    const { simulation, asked } = counting();
    const { post, get, requirements } = await testApp({ simulation });
    const { id } = (await post(examplePairing())).json();
    expect([asked(), requirements.find(id, MODEL_VERSION)]).toEqual([0, undefined]);
    const first = await get(`/v1/verdicts/${id}/requirement`);
    expect(first.statusCode).toBe(200);
    expect(first.json()).toEqual({
      verdictId: id,
      modelVersion: MODEL_VERSION,
      createdAt: '2026-03-02T08:00:00.000Z',
      circuit: null,
      points: [
        {
          latchingCurrent_mA: 50,
          holdingCurrent_mA: 50,
          failsAt: 1.01,
          decidedBy: 'low-mains-cold',
          cause: 'holding',
          smallerDoes: true,
        },
      ],
      summary: 'Canned for a test.',
    });
    expect((await get(`/v1/verdicts/${id}/requirement`)).json()).toEqual(first.json());
    expect(asked()).toBe(1);
  });

  it('is computed once for callers that ask at the same time', async () => {
    const { promise, resolve } = pending<Bounded>();
    const { simulation, asked } = counting(() => promise);
    const { post, get } = await testApp({ simulation });
    const { id } = (await post(examplePairing())).json();
    const asking = [1, 2, 3].map(() => get(`/v1/verdicts/${id}/requirement`));
    await expect.poll(asked, { timeout: 60_000 }).toBe(1);
    resolve({ ok: true, value: CANNED_REQUIREMENT });
    const answers = await Promise.all(asking);
    expect(new Set(answers.map(({ body }) => body)).size).toBe(1);
    expect(asked()).toBe(1);
  });

  it('is not there for a verdict that is not', async () => {
    const answer = await (await testApp({ simulation: fakeSimulation() })).get(`/v1/verdicts/${'0'.repeat(26)}/requirement`);
    expect([answer.statusCode, answer.json().type]).toEqual([404, 'urn:holdfast:problem:verdict-not-found']);
  });

  it('keeps nothing where the queue is full', async () => {
    const full = {
      ...fakeSimulation(),
      boundRequirement: async () => ({ ok: false, failure: { kind: 'queue-full', retryAfter_s: 3 } }) as const,
    };
    const { post, get, requirements } = await testApp({ simulation: full });
    const { id } = (await post(examplePairing())).json();
    const answer = await get(`/v1/verdicts/${id}/requirement`);
    expect([answer.statusCode, answer.headers['retry-after']]).toEqual([503, '3']);
    expect(requirements.find(id, MODEL_VERSION)).toBeUndefined();
  });

  it('of a filament lamp at one dial position is as the closed form has it: what flows when the gate lets go, and at the cold corner', async () => {
    const { post, get } = await testApp();
    const pairing = briefPairing();
    // fired at 90 degrees, held to the end: nothing but the holding current can end the conduction early
    pairing.dimmer.drive = { kind: 'timed', firingAngleFull_deg: 90, firingAngleLow_deg: 91, pulses: 'single', gatePulse_us: 100 };
    // without the snubber, whose discharge through the triac would latch it
    pairing.dimmer.snubber = null;
    pairing.options = { dialPositions_pct: [100] };
    const { id } = (await post(pairing)).json();
    const { points } = (await get(`/v1/verdicts/${id}/requirement`)).json();
    expect(points.length).toBeGreaterThanOrEqual(12);
    // 60 W at 230 V, low mains, currents 1.2 times as high when cold; latching at the end of the gate pulse, 91.8 degrees
    const crest = (0.9 * 230 * Math.SQRT2) / (230 ** 2 / 60) / 1.2;
    const largest = Math.max(...points.map((point: { latchingCurrent_mA: number }) => point.latchingCurrent_mA));
    expect(largest / 1000).toBeGreaterThan(0.95 * crest);
    expect(largest / 1000).toBeLessThan(1.02 * crest);
  });
});
