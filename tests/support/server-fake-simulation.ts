/** A simulation whose answers and timing a test decides, where the test is about the service around it and not about the circuit. */
import type { Requirement, Waveforms } from '../../model/index.ts';
import { askedPairing } from '../../server/schemas/pairing.ts';
import type { AskedJudgement } from '../../server/simulation/asked-circuit.ts';
import { judgeAsked } from '../../server/simulation/asked-judging.ts';
import { fitProfile } from '../../server/simulation/profile-fitting.ts';
import type { Simulated, Simulation } from '../../server/simulation/simulation.ts';
import { completePairing } from '../../server/verdicts/pairing-completion.ts';
import { toModel } from '../../server/verdicts/pairing-to-model.ts';
import { briefPairing } from './server-pairings.ts';

/** Of the form of a real one, whatever the model adds to it; what tests look at is set. */
export const CANNED_JUDGEMENT: AskedJudgement = cannedJudgement();

function cannedJudgement(): AskedJudgement {
  const completion = completePairing(askedPairing.parse(briefPairing()));
  const { pairing, options } = toModel(completion);
  const outcome = judgeAsked(pairing, options);
  if (!outcome.ok) throw new Error('It was to be judged.');
  const { counters } = outcome.value;
  return { ...outcome.value, grade: 'suitable', summary: 'Canned for a test.', dial: [], counters: { ...counters, halfCycles: 7 } };
}

export const CANNED_REQUIREMENT: Requirement = {
  points: [
    { latchingCurrent: 0.05, holdingCurrent: 0.05, failsAt: 1.01, decidedBy: 'low-mains-cold', cause: 'holding', smallerDoes: true },
  ],
  summary: 'Canned for a test.',
  counters: { ...CANNED_JUDGEMENT.counters, halfCycles: 9 },
};

export interface FakeSimulation extends Simulation {
  /** how often a judgement was asked for */
  readonly asked: () => number;
}

export function fakeSimulation(
  judge: () => Promise<Simulated<AskedJudgement>> = async () => ({ ok: true, value: CANNED_JUDGEMENT }),
): FakeSimulation {
  let asked = 0;
  return {
    asked: () => asked,
    judge: () => {
      asked += 1;
      return judge();
    },
    boundRequirement: async () => ({ ok: true, value: CANNED_REQUIREMENT }),
    fitProfile: async (question) => fitProfile(question),
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
