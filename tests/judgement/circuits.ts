/** Circuits and options that several tests of the judgement share, in SI units; generic values, nobody's product. */
import type { Dimmer, JudgeOptions, Lamp, Pairing } from '../../model/index.ts';
import {
  both,
  diacDrive,
  emulator,
  everydayDimmer,
  idealDimmer,
  mains230,
  pairing,
  peakOf,
  resistor,
  stiff,
  timedDrive,
} from '../support/model-pairings.ts';

/** the whole dial in steps of 10 %, at every corner */
export const ALL_CORNERS: JudgeOptions = {
  dialPositions: Array.from({ length: 11 }, (_, k) => 10 * k),
  corners: 'all',
  dropOutAngle: 30,
};
export const NOMINAL: JudgeOptions = { ...ALL_CORNERS, corners: 'nominal' };

const milli = (value: number) => both(value / 1000);

export const dimmer = (latching_mA: number, holding_mA: number, change: Partial<Dimmer> = {}): Dimmer =>
  everydayDimmer({
    latchingCurrent: milli(latching_mA),
    holdingCurrent: milli(holding_mA),
    // little fixed resistance: a dial that reaches far up, where a lamp that lets go early is fired again
    drive: diacDrive({ fixedResistance: 6.8e3 }),
    ...change,
  });

/** 8 W lamps that draw like resistors */
export const emulators = (count: number, on: Dimmer, capacitance = 47e-9, lamp: Partial<Lamp> = {}): Pairing =>
  pairing(mains230, on, { ...emulator(8, mains230, { capacitance }), ...lamp }, count);

/** the dimmer's own choke rings with the lamps' capacitors, harder with three to seven lamps than with two or eight */
export const ringing = (count: number): Pairing =>
  emulators(count, dimmer(25, 14, { choke: { inductance: 1e-3, resistance: 0.7, lossResistance: 3000 } }), 100e-9);

export const OHMS = 5290;
export const PEAK = peakOf(stiff(230, 50));
/** s and degrees: short against everything that the closed forms know of */
export const PULSE = 10e-6;
export const PULSE_ANGLE = (PULSE / 10e-3) * 180;

/**
 * A resistive lamp of 10 W on a stiff supply and a triac without drop, snubber or turn-off time: fired by one short pulse at `full` to
 * `low` degrees it latches if Vp sin(alpha)/R reaches the latching current before the pulse ends, and conducts until pi - asin(IH R/Vp).
 */
export function resistiveLamp(full: number, low: number, change: Partial<Dimmer> = {}, count = 1, power: number | null = null): Pairing {
  const drive = timedDrive({ firingAngleFull: full, firingAngleLow: low, gatePulse: PULSE });
  return pairing(stiff(230, 50), idealDimmer({ drive, ...change }), { ...resistor(OHMS), ratedPower: power }, count);
}

/** A through the lamp at an angle, of so many times the nominal mains */
export const currentAt = (angle: number, mains = 1): number => (mains * PEAK * Math.sin((angle * Math.PI) / 180)) / OHMS;
