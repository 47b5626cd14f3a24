/**
 * Writes the netlist of one pairing at one dial position for ngspice: mains, dimmer (deck-dimmer.ts), lamp groups and added load
 * (deck-lamp.ts), and the analysis with its tolerances. Written from the description of the circuit, not from the engine, so that
 * the two can check each other.
 */
import type { Pairing } from '../../model/pairing.ts';
import { dimmer } from './deck-dimmer.ts';
import { number, resistorOrShort } from './deck-element.ts';
import { addedLoad, lampGroup } from './deck-lamp.ts';

/** What decides how closely ngspice follows the circuit; frozen results name the values they were made with. */
export interface DeckTolerances {
  /** largest step, s: between events a switch is noticed at most this late, and the deck's detectors then shorten the step */
  readonly maximumStep: number;
  readonly relative: number;
  /** V and A */
  readonly voltage: number;
  readonly current: number;
  readonly method: 'trap' | 'gear';
  /** F, from the lamp line and each lamp's input to neutral: where inductors meet without a capacitor the solver may need one to converge */
  readonly stray: number;
}

export const ordinaryTolerances: DeckTolerances = {
  maximumStep: 1e-6,
  relative: 1e-4,
  voltage: 1e-6,
  current: 1e-9,
  method: 'trap',
  stray: 0,
};

/** Vectors that a run saves, in this order after the time. */
export const savedVectors = ['v(on)', 'v(vct)', 'i(vline)', 'i(vlamp)', 'v(a)'] as const;

/** A fresh start: every state is zero at the rising zero crossing, which is also the operating point, so no initial conditions are given. */
export function deck(pairing: Pairing, dial: number, halfCycles: number, tolerances: DeckTolerances = ordinaryTolerances): string {
  const { mains } = pairing;
  const end = halfCycles / (2 * mains.frequency);
  const lines = [
    'phase-cut dimmer and lamps',
    `vmains live 0 sin(0 ${number(Math.SQRT2 * mains.voltage)} ${number(mains.frequency)})`,
    'vline live line 0',
    resistorOrShort('source', 'line', 's', mains.sourceResistance),
    ...dimmer(pairing, dial, halfCycles),
    'vlamp a lamp 0',
    ...pairing.lamps.flatMap((group, index) => lampGroup(group, index, 'lamp')),
    ...addedLoad(pairing.addedLoad, 'lamp'),
    'rleak a 0 1g',
    ...strayCapacitors(pairing.lamps.length, tolerances.stray),
    `.options method=${tolerances.method} maxord=2 trtol=1 reltol=${number(tolerances.relative)} vntol=${number(tolerances.voltage)}` +
      ` abstol=${number(tolerances.current)} chgtol=1e-11 itl4=60 gmin=1e-15`,
    `.save ${savedVectors.join(' ')}`,
    `.tran ${number(tolerances.maximumStep)} ${number(end)} 0 ${number(tolerances.maximumStep)}`,
    '.end',
  ];
  return `${lines.join('\n')}\n`;
}

function strayCapacitors(lamps: number, stray: number): string[] {
  if (stray === 0) return [];
  const inputs = Array.from({ length: lamps }, (_, index) => `cstray${index} p${index} 0 ${number(stray)}`);
  return [`cstray a 0 ${number(stray)}`, ...inputs];
}
