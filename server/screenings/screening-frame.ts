/** What a screening's request says about every one of its pairings. */
import type { PairingFrame } from '../queue/judging-queue.ts';
import type { ScreeningRequest } from '../schemas/screening.ts';

export function frameOf({ mains, addedLoad, options }: ScreeningRequest): PairingFrame {
  return { mains, ...(addedLoad === undefined ? {} : { addedLoad }), ...(options === undefined ? {} : { options }) };
}

/** A re-screening has none: its pairings bring their own. */
export function countsOf(request: ScreeningRequest): readonly number[] {
  return 'counts' in request ? request.counts : [];
}
