/** What the search for one kind of remedy came to. */
import type { Remedy } from '../../verdict.ts';

export interface Search {
  readonly kind: Remedy['kind'];
  /** simulated candidates */
  readonly candidates: number;
  readonly remedy: Remedy | null;
}
