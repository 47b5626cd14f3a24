/** The gate of a timed drive: a piecewise-linear source that is 1 while the gate is driven, and its bit. The lamp has no say in it. */
import type { TimedDrive } from '../../model/pairing.ts';
import { number } from './deck-element.ts';

/** rise and fall, s; the bit changes halfway */
const edge = 2e-9;

export function gatePulses(drive: TimedDrive, frequency: number, dial: number, halfCycles: number): string[] {
  const halfCycle = 1 / (2 * frequency);
  const delay = (gateAngle(drive, dial) / 180) * halfCycle;
  const points: string[] = ['0 0'];
  for (let k = 0; k < halfCycles; k++) {
    for (const [from, to] of pulsesOfHalfCycle(drive, delay, halfCycle)) {
      const start = k * halfCycle + from;
      const end = k * halfCycle + to;
      points.push(`${number(start)} 0`, `${number(start + edge)} 1`, `${number(end)} 1`, `${number(end + edge)} 0`);
    }
  }
  const lines = [`vgate gatex 0 pwl(${points.slice(0, 9).join(' ')}`];
  for (let from = 9; from < points.length; from += 8) lines.push(`+ ${points.slice(from, from + 8).join(' ')}`);
  lines.push('+ )', 'rgate gatex 0 1k', 'agate [gatex] [gated] todigital', 'rvct vct 0 1k');
  return lines;
}

export function gateAngle(drive: TimedDrive, dial: number): number {
  return drive.firingAngleLow + ((drive.firingAngleFull - drive.firingAngleLow) * dial) / 100;
}

function pulsesOfHalfCycle(drive: TimedDrive, delay: number, halfCycle: number): (readonly [number, number])[] {
  // the end is kept clear of the next half-cycle's first pulse
  const last = halfCycle - 4 * edge;
  if (drive.pulses === 'held') return [[delay, last]];
  if (drive.pulses === 'single') return [[delay, Math.min(delay + drive.gatePulse, last)]];
  const pulses: (readonly [number, number])[] = [];
  for (let start = delay; start < last - edge; start += drive.pulseSpacing) pulses.push([start, Math.min(start + drive.gatePulse, last)]);
  return pulses;
}
