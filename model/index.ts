/**
 * The one door to the model: everything outside imports from here and nothing deeper. Pure functions: the same input gives the
 * same bits. Expected failures come back as values (failures.ts); a throw is a bug.
 */
export type { ModelFailure, Outcome } from './failures.ts';
export { ASSUMABLE_PATHS } from './judgement/assumed/assumable-at.ts';
export { judgePairing } from './judgement/judge-pairing.ts';
export { judgeVariants, type Variant } from './judgement/judge-variants.ts';
export { COLD_FACTOR, MOST_COUNTS } from './judgement/judgement-figures.ts';
export { judgeCounts } from './judgement/lamp-count.ts';
export { findRemedies } from './judgement/remedies/find-remedies.ts';
export { requirementBoundary } from './judgement/requirement.ts';
export { supplyBand } from './judgement/supply-band.ts';
export { recordWaveforms } from './observation/waveform-recording.ts';
export type * from './pairing.ts';
export { type ClassCandidate, type ClassLamp, type ClassLamps, lampsOfClass } from './profiles/class-lamps.ts';
export { LAMP_CLASSES, type LampClass } from './profiles/lamp-class.ts';
export type { PhasePoint, PhaseTable } from './profiles/phase-table.ts';
export { type FitGround, fitPhaseTable, type ProfileFit, type ProfileMeans } from './profiles/phase-table-fit.ts';
export type { ProfileFailure, ProfileOutcome, ScopeFailure } from './profiles/profile-failures.ts';
export { NOTHING_STATED, readScopeColumns, type StatedColumns, separatorOf } from './profiles/scope-columns.ts';
export { fitScopeRecord, type ScopeFit, type ScopeRecord, type ScopeTable } from './profiles/scope-record.ts';
export { DROP_OUT_ANGLE } from './tolerances.ts';
export type * from './verdict.ts';
export { MODEL_VERSION } from './version.ts';
