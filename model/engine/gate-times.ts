/** When a timed drive switches its gate in a half-cycle. */
import type { Dimmer } from '../pairing.ts';

/** on, off, on, off, ... in s since the zero crossing, for a dial position of 0..100 %; nothing for a diac drive */
export function gateTimesOf(drive: Dimmer['drive'], dial: number, halfPeriod: number): number[] {
  if (drive.kind !== 'timed') return [];
  const angle = drive.firingAngleLow + ((drive.firingAngleFull - drive.firingAngleLow) * dial) / 100;
  const first = (angle / 180) * halfPeriod;
  if (drive.pulses === 'held') return [first, halfPeriod];
  const times: number[] = [];
  for (let at = first; at < halfPeriod; at += drive.pulseSpacing) {
    times.push(at, Math.min(at + drive.gatePulse, halfPeriod));
    if (drive.pulses === 'single') break;
  }
  return times;
}
