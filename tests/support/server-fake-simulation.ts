/** A simulation whose answers and timing a test decides, where the test is about the service around it and not about the circuit. */
import type { Judgement, Waveforms } from '../../model/index.ts';
import type { Simulated, Simulation } from '../../server/simulation/simulation.ts';

export const CANNED_JUDGEMENT: Judgement = {
  grade: 'suitable',
  summary: 'Canned for a test.',
  conditions: [],
  reasons: [],
  dial: [],
  popOn: { litFrom: 10, outBelow: 5 },
  corners: [{ name: 'nominal', grade: 'suitable' }],
  counters: { halfCycles: 7, steps: 6, events: 5, modesBuilt: 4 },
};

export interface FakeSimulation extends Simulation {
  /** how often a judgement was asked for */
  readonly asked: () => number;
}

export function fakeSimulation(
  judge: () => Promise<Simulated<Judgement>> = async () => ({ ok: true, value: CANNED_JUDGEMENT }),
): FakeSimulation {
  let asked = 0;
  return {
    asked: () => asked,
    judge: () => {
      asked += 1;
      return judge();
    },
    recordWaveforms: async (_pairing, _positions, { sweep, position }) => ({ ok: true, value: cannedWaveforms(sweep, position) }),
  };
}

function cannedWaveforms(sweep: Waveforms['sweep'], position: number): Waveforms {
  const column = (first: number) => Float64Array.of(first, first + 0.5);
  return {
    sweep,
    position,
    time: Float64Array.of(0, 0.001),
    mainsVoltage: column(1),
    lampVoltage: column(2),
    lampCurrent: column(3),
    dimmerCurrent: column(4),
    timingVoltage: column(5),
    gateCurrent: column(6),
  };
}

/** A promise and what settles it. */
export function pending<T>(): { readonly promise: Promise<T>; readonly resolve: (value: T) => void } {
  let resolve: (value: T) => void = () => undefined;
  const promise = new Promise<T>((settle) => {
    resolve = settle;
  });
  return { promise, resolve };
}
