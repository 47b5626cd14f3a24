/** What one half-cycle of the mains did. Angles in degrees from the zero crossing that starts it; SI units otherwise. */
export interface HalfCycle {
  /** number since the start of the run; even ones are the mains' positive half-cycles */
  index: number;
  /** angle of each firing: the gate turning the triac on from off */
  firings: number[];
  /** angle at which each conduction that began here ended (may exceed 180) */
  ends: number[];
  /** sum of the conductions that began here, degrees */
  conduction: number;
  /** gate pulses that ended without the triac having latched */
  failedLatches: number;
  /** the diac conducted for longer than a dump takes */
  diacStuck: boolean;
}

export function emptyHalfCycle(index: number): HalfCycle {
  return { index, firings: [], ends: [], conduction: 0, failedLatches: 0, diacStuck: false };
}
