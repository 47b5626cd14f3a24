/**
 * Writes to the record until it succeeds: where the disk is full it waits and tries again, and says when it begins and ends to wait.
 * Anything else that goes wrong is thrown.
 */
import { diskTrouble } from './disk-trouble.ts';

export interface DurableWriting {
  /** False where it was given up, with nothing written. */
  write(act: () => void): Promise<boolean>;
  /** Waits for room no longer: what is being tried again fails once more and is given up. */
  giveUp(): void;
}

export interface Trouble {
  begins(detail: string): void;
  ends(): void;
}

export function durableWriting({ begins, ends }: Trouble, retry_ms: number): DurableWriting {
  const givingUp = new AbortController();
  return {
    write: async (act) => {
      for (let waited = false; ; waited = true) {
        try {
          act();
          if (waited) ends();
          return true;
        } catch (error) {
          const trouble = diskTrouble(error);
          if (trouble === undefined) throw error;
          if (!waited) begins(trouble);
        }
        if (givingUp.signal.aborted) return false;
        await waitFor(retry_ms, givingUp.signal);
      }
    },
    giveUp: () => givingUp.abort(),
  };
}

export function waitFor(ms: number, signal: AbortSignal): Promise<void> {
  return new Promise((resolve) => {
    const done = (): void => {
      clearTimeout(timer);
      signal.removeEventListener('abort', done);
      resolve();
    };
    const timer = setTimeout(done, ms);
    signal.addEventListener('abort', done);
    if (signal.aborted) done();
  });
}
