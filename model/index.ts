/**
 * The one door to the model: everything outside imports from here and nothing deeper. Pure functions: the same input gives the
 * same bits. Expected failures come back as values (failures.ts); a throw is a bug.
 */
export type { ModelFailure, Outcome } from './failures.ts';
export { judgePairing } from './judgement/judge-pairing.ts';
export { recordWaveforms } from './observation/waveform-recording.ts';
export type * from './pairing.ts';
export { DROP_OUT_ANGLE } from './tolerances.ts';
export type * from './verdict.ts';
export { MODEL_VERSION } from './version.ts';
