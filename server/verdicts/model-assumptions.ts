/**
 * What the model takes for granted and no field can change. Listed under every verdict's `assumptions`, after the defaults, so that a
 * reader sees the whole ground it stands on. A test holds the numbers to the model's own.
 */
import { COLD_FACTOR } from '../../model/index.ts';
import type { Assumption } from './pairing-completion.ts';

const CIRCUIT = 'fixed in the model';

export const MODEL_ASSUMPTIONS: readonly Assumption[] = [
  { path: 'model.mainsShape', value: 'sine', basis: `${CIRCUIT}: no harmonics, no ripple-control signals, nothing else on the circuit` },
  { path: 'model.bridgeDrop_V', value: 1.4, basis: `${CIRCUIT}: both diodes of a lamp's bridge together, common practice` },
  { path: 'model.lineLeakage_MOhm', value: 1000, basis: `${CIRCUIT}: leakage from the lamp line to neutral` },
  { path: 'model.dropperDischarge_MOhm', value: 1, basis: `${CIRCUIT}: across a capacitor in series with a lamp, from memory` },
  {
    path: 'model.coldFactor',
    value: COLD_FACTOR,
    basis: `${CIRCUIT}: latching and holding currents at 0 degrees C over those at 25, where a dimmer is switched on cold; from memory`,
  },
  { path: 'model.dialTaper', value: 'linear', basis: `${CIRCUIT}: dial position to timing resistance, or to firing angle` },
  { path: 'model.lampsOfAGroup', value: 'identical', basis: `${CIRCUIT}: no spread between lamps of one group` },
  {
    path: 'model.temperature',
    value: 'steady',
    basis: `${CIRCUIT}: within a sweep nothing warms up; a filament's resistance is its hot one`,
  },
  {
    path: 'model.beyondTable',
    value: 'last slope',
    basis: `${CIRCUIT}: above its last point an iv-table goes on along its last slope, or level where that falls`,
  },
  {
    path: 'model.inputMemory',
    value: 'none',
    basis: `${CIRCUIT}: a lamp has no state but its capacitors and inductors; drivers that start with a delay or adapt are not covered`,
  },
];
