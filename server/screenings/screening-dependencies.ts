/** What screenings are made of: the record's stores, whatever judges, and the clock. */
import type { Stores } from '../../db/stores.ts';
import type { JudgingQueue } from '../queue/judging-queue.ts';
import type { ScreeningSignals } from './screening-signals.ts';

export type ScreeningStores = Pick<
  Stores,
  'screenings' | 'screeningSelection' | 'screeningPages' | 'screeningVerdicts' | 'stalePairs' | 'verdicts' | 'judgedPairs' | 'entrySearch'
>;

export interface ScreeningDependencies extends ScreeningStores {
  readonly queue: JudgingQueue;
  readonly signals: ScreeningSignals;
  readonly now: () => Date;
  readonly logger: { info(particulars: object, message: string): void; warn(particulars: object, message: string): void };
}
