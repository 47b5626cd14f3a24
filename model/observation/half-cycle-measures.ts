/** What a half-cycle delivered, from the segments that it passed through. */
import { OUTPUT } from '../circuit/configuration.ts';
import type { Segment } from '../engine/segment.ts';

export interface Measures {
  /** integral of the line current, C */
  readonly charge: number;
  /** integral of the squared line current, A^2 s */
  readonly squaredCurrent: number;
  /** largest line current, A */
  readonly peakCurrent: number;
  /** energy into all lamps (not the added load), J */
  readonly lampEnergy: number;
}

export function measuresOf(segments: readonly Segment[]): Measures {
  let charge = 0;
  let squaredCurrent = 0;
  let lampEnergy = 0;
  let peakCurrent = 0;
  for (const segment of segments) {
    charge += segment.integral(OUTPUT.lineCurrent);
    squaredCurrent += segment.productIntegral(OUTPUT.lineCurrent, OUTPUT.lineCurrent);
    lampEnergy += segment.productIntegral(OUTPUT.lampVoltage, OUTPUT.lampCurrent);
    peakCurrent = segment.peak(OUTPUT.lineCurrent, peakCurrent);
  }
  return { charge, squaredCurrent, peakCurrent, lampEnergy };
}
