/** Asks every day at the same time for a screening of what is stale. A day on which the service does not run at that time is left out. */

export interface DailyParts {
  /** HH:MM, UTC */
  readonly at: string;
  readonly now: () => Date;
  readonly ask: () => readonly string[];
  readonly logger: { info(particulars: object, message: string): void; warn(particulars: object, message: string): void };
}

export function startDailyRescreening({ at, now, ask, logger }: DailyParts): void {
  const wait = (): void => {
    const timer = setTimeout(
      () => {
        try {
          logger.info({ screenings: ask() }, 'stale verdicts are screened again');
        } catch (error) {
          logger.warn({ err: error }, 'stale verdicts could not be screened again; the next try is tomorrow');
        }
        wait();
      },
      msUntil(at, now()),
    );
    timer.unref();
  };
  wait();
}

/** ms until it is next that time of the day, UTC; never zero, so that a timer that is early does not ask twice. */
export function msUntil(at: string, now: Date): number {
  const [hours = 0, minutes = 0] = at.split(':').map(Number);
  const next = new Date(now);
  next.setUTCHours(hours, minutes, 0, 0);
  if (next.getTime() - now.getTime() < 1000) next.setUTCDate(next.getUTCDate() + 1);
  return next.getTime() - now.getTime();
}
