/** Simulates in the calling thread: for scripts and tests. It blocks until it is done, so a server uses the pool. */
import { recordWaveforms, requirementBoundary } from '../../model/index.ts';
import { judgeAsked } from './asked-judging.ts';
import { fitProfile } from './profile-fitting.ts';
import type { Simulation } from './simulation.ts';

export const directSimulation: Simulation = {
  judge: async (pairing, options) => judgeAsked(pairing, options),
  recordWaveforms: async (pairing, dialPositions, place) => recordWaveforms(pairing, dialPositions, place),
  boundRequirement: async (pairing, options) => requirementBoundary(pairing, options),
  fitProfile: async (question) => fitProfile(question),
};
