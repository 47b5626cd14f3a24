/** Lets long work in the main thread make way for other requests: `await breathe()` between small steps. */
import { setImmediate as turn } from 'node:timers/promises';

/** ms of work between two breaks; a request that comes in between waits about this long */
export const STRETCH = 4;
/**
 * Turns of the event loop in a break. A new connection takes one to be accepted, of which there is only one a turn, one to be read and
 * one to be answered; a break of a single turn lets connections queue up that come faster than breaks do.
 */
const TURNS = 8;

export function pacing(): () => Promise<void> | undefined {
  let since = performance.now();
  const pause = async (): Promise<void> => {
    for (let count = 0; count < TURNS; count += 1) await turn();
    since = performance.now();
  };
  return () => (performance.now() - since < STRETCH ? undefined : pause());
}
