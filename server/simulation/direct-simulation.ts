/** Simulates in the calling thread: for scripts and tests. It blocks until it is done, so a server uses the pool. */
import { judgePairing, recordWaveforms } from '../../model/index.ts';
import type { Simulation } from './simulation.ts';

export const directSimulation: Simulation = {
  judge: async (pairing, options) => judgePairing(pairing, options),
  recordWaveforms: async (pairing, dialPositions, place) => recordWaveforms(pairing, dialPositions, place),
};
