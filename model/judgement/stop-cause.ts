/** Why a pairing is not workable, in one word: which bound it has run into. */

import type { Pairing } from '../pairing.ts';
import type { ReasonCode, StopCause } from '../verdict.ts';
import { atCorner } from './corners.ts';
import { dropOutCause } from './drop-out-cause.ts';
import type { EffortTally } from './effort.ts';
import type { JudgedCorner } from './over-corners.ts';

const BY_REASON: readonly (readonly [ReasonCode, StopCause])[] = [
  ['over-peak-rating', 'peak-current'],
  ['over-current-rating', 'rating'],
  ['over-load-rating', 'rating'],
  ['under-load-rating', 'rating'],
  ['undecided', 'undecided'],
  ['never-lights', 'dark'],
];

export function stopCause(pairing: Pairing, { corner, rows, graded }: JudgedCorner, effort: EffortTally): StopCause {
  for (const [code, cause] of BY_REASON) if (graded.reasons.some((r) => r.code === code)) return cause;
  // the highest dial position that upsets the pairing decides, since a steady range has to reach the top
  const upset = rows.filter((r) => r.state !== 'steady' && r.state !== 'dark').sort((a, b) => b.position - a.position);
  const dropping = upset.find((r) => r.firings.max >= 2 || r.earlyDropOuts > 0 || r.failedLatches > 0 || r.silentShare > 0);
  const cause = dropping === undefined ? null : dropOutCause(atCorner(pairing, corner), dropping.position, effort);
  if (cause !== null) return cause;
  return upset.some((r) => r.state === 'lopsided') ? 'lopsided' : 'uneven';
}
