/** Lets long work in the main thread make way for other requests: `await breathe()` between small steps. */
import { setImmediate as turn } from 'node:timers/promises';

/** ms of work between two turns of the event loop; a health check that comes in between waits no longer than this for it */
const STRETCH = 4;

export function pacing(): () => Promise<void> | undefined {
  let since = performance.now();
  return () => {
    if (performance.now() - since < STRETCH) return undefined;
    return turn().then(() => {
      since = performance.now();
    });
  };
}
