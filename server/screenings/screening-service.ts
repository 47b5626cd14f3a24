/** Puts the parts of screenings together on a record's stores: the signals, and the screenings themselves. */
import type { ScreeningDependencies, ScreeningStores } from './screening-dependencies.ts';
import type { RunPace } from './screening-run.ts';
import { type ScreeningSignals, screeningSignals } from './screening-signals.ts';
import { type Screenings, screeningsOf } from './screenings.ts';

export interface ScreeningService {
  readonly screenings: Screenings;
  readonly stores: ScreeningStores;
  readonly signals: ScreeningSignals;
}

export interface ScreeningParts extends Pick<ScreeningDependencies, 'queue' | 'now' | 'logger'> {
  readonly stores: ScreeningStores;
  readonly pace?: RunPace;
}

/** Nothing runs before `screenings.start()`. */
export function screeningService({ stores, queue, now, logger, pace }: ScreeningParts): ScreeningService {
  const signals = screeningSignals();
  return { screenings: screeningsOf({ ...stores, queue, signals, now, logger }, pace), stores, signals };
}
