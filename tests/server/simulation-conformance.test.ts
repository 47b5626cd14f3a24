import { afterAll, describe, expect, it } from 'vitest';
import { askedPairing } from '../../server/schemas/pairing.ts';
import { shownPairing } from '../../server/simulation/asked-circuit.ts';
import { directSimulation } from '../../server/simulation/direct-simulation.ts';
import type { Simulation } from '../../server/simulation/simulation.ts';
import { startSimulationPool } from '../../server/simulation/simulation-pool.ts';
import { completePairing } from '../../server/verdicts/pairing-completion.ts';
import { toModel } from '../../server/verdicts/pairing-to-model.ts';
import { briefPairing } from '../support/server-pairings.ts';

const pool = startSimulationPool({ threads: 1, queueLimit: 8 });
afterAll(() => pool.destroy());

function modelPairing() {
  const completion = completePairing(askedPairing.parse({ ...briefPairing(), options: { dialPositions_pct: [40, 80] } }));
  return toModel(completion);
}

const { pairing, options } = modelPairing();
const circuit = shownPairing(pairing, []);
const place = { sweep: 'down', position: 40 } as const;

describe.each<[string, Simulation]>([
  ['the pool', pool],
  ['the direct call', directSimulation],
])('simulating through %s', (_, simulation) => {
  it('gives a judgement of every position, up and down', async () => {
    const outcome = await simulation.judge(pairing, options);
    expect(outcome).toMatchObject({ ok: true, value: { grade: expect.any(String) } });
    const rows = outcome.ok ? outcome.value.dial.map(({ sweep, position }) => [sweep, position]) : [];
    expect(rows).toHaveLength(4);
    expect(rows).toEqual(
      expect.arrayContaining([
        ['up', 40],
        ['up', 80],
        ['down', 80],
        ['down', 40],
      ]),
    );
  });

  it('gives the same bits as the direct call', async () => {
    expect(await simulation.judge(pairing, options)).toEqual(await directSimulation.judge(pairing, options));
    expect(await simulation.recordWaveforms(circuit, options.dialPositions, place)).toEqual(
      await directSimulation.recordWaveforms(circuit, options.dialPositions, place),
    );
  });

  it('gives waveforms as columns of doubles', async () => {
    const outcome = await simulation.recordWaveforms(circuit, options.dialPositions, place);
    if (!outcome.ok) throw new Error('It was to be recorded.');
    expect(outcome.value.time).toBeInstanceOf(Float64Array);
    expect(outcome.value.lampVoltage).toHaveLength(outcome.value.time.length);
  });

  it('gives a refusal of the model as a value', async () => {
    const impossible = { ...pairing, mains: { ...pairing.mains, voltage: Number.NaN } };
    const refused = { ok: false, failure: { kind: 'invalid-pairing', issues: [{ path: 'mains.voltage', message: expect.any(String) }] } };
    expect(await simulation.judge(impossible, options)).toMatchObject(refused);
    expect(await simulation.recordWaveforms({ ...circuit, mains: impossible.mains }, options.dialPositions, place)).toMatchObject(refused);
  });
});
