/**
 * Stopping as a written sequence: each stage has a deadline, and one that fails or overruns is logged and does not keep the next from
 * running.
 */

export interface StopStage {
  readonly name: string;
  readonly deadline_ms: number;
  readonly act: () => Promise<void> | void;
  /** what to do when the deadline passes before `act` is done */
  readonly orElse?: () => Promise<void> | void;
}

interface StopLog {
  info(particulars: object, message: string): void;
  error(particulars: object, message: string): void;
}

/** Whether every stage was done in its time. */
export async function runStopStages(stages: readonly StopStage[], log: StopLog): Promise<boolean> {
  let clean = true;
  for (const { name, deadline_ms, act, orElse } of stages) {
    try {
      if (await finishesWithin(deadline_ms, act)) {
        log.info({ stage: name }, 'stop stage done');
        continue;
      }
      log.error({ stage: name, deadline_ms }, 'stop stage overran its deadline');
      await orElse?.();
    } catch (error) {
      log.error({ stage: name, err: error }, 'stop stage failed');
    }
    clean = false;
  }
  return clean;
}

function finishesWithin(deadline_ms: number, act: () => Promise<void> | void): Promise<boolean> {
  return new Promise((resolve, reject) => {
    const timer = setTimeout(() => resolve(false), deadline_ms);
    // Where the deadline came first, a later failure of the stage settles nothing and brings nothing down.
    Promise.resolve()
      .then(act)
      .then(() => resolve(true), reject)
      .finally(() => clearTimeout(timer));
  });
}
