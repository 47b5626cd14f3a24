/** The response entry of an answer that has no body. */
import { z } from 'zod';

export function noBody(description: string) {
  return z.undefined().describe(description);
}
