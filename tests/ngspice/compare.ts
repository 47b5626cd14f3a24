/**
 * How far one run is from a settled pattern or from a wandering run's averages, against what is accepted. A pattern may stand at
 * another half-cycle than in the reference, as far as the circuit treats its polarities alike.
 */
import { treatsPolaritiesAlike } from '../../model/observation/dial-observation.ts';
import type { Pairing } from '../../model/pairing.ts';
import { type Averages, averagesOf, type HalfCycle, inOwnPolarity, type Pattern } from './pattern.ts';

export interface Figure {
  readonly kind: string;
  readonly deviation: number;
  readonly allowed: number;
}

export interface Comparison {
  /** null where the same half-cycles hold the same number of firings (and where the reference wanders) */
  readonly mismatch: string | null;
  /** largest deviations; empty beside a mismatch */
  readonly figures: readonly Figure[];
}

/** degrees; relative */
const acceptedAngle = 0.05;
const acceptedCharge = 0.005;
/** a half-cycle that passes less charge than this, C, is dark: its charge is what leaks past the triac */
const darkCharge = 2e-6;
/** the last so many half-cycles are held against a pattern */
const compared = 24;

/** Of a run whose reference wanders the first `settle` half-cycles are passed over. */
export function compare(run: readonly HalfCycle[], reference: Pattern, pairing: Pairing, settle: number): Comparison {
  if (reference.kind === 'wanders') return onAverage(averagesOf(run.slice(settle)), reference);
  const step = treatsPolaritiesAlike(pairing.dimmer) ? 1 : 2;
  const tried: Comparison[] = [];
  for (let shift = 0; shift < reference.halfCycles.length; shift += step)
    tried.push(atShift(run.length - compared, run, reference.halfCycles, shift));
  const same = tried.filter(({ mismatch }) => mismatch === null);
  return same.sort((a, b) => worst(a) - worst(b))[0] ?? (tried[0] as Comparison);
}

/**
 * From the fresh start on, as far as the shorter run goes: half-cycle by half-cycle, or on average where the circuit wanders. There
 * whatever is small grows: the chords in place of a reservoir's constant power come to 0.13 degrees within eight half-cycles on one
 * circuit, and to 0.015 with four times as many chords.
 */
export function compareFromStart(run: readonly HalfCycle[], reference: readonly HalfCycle[], wanders: boolean): Comparison {
  const own = run.slice(0, reference.length);
  const expected = inOwnPolarity(reference);
  return wanders ? onAverage(averagesOf(own), averagesOf(expected)) : atShift(0, own, expected, 0);
}

function onAverage(own: Averages, reference: Averages): Comparison {
  return {
    mismatch: null,
    figures: [
      { kind: 'mean firings (relative)', deviation: relative(own.firings, reference.firings), allowed: 0.05 },
      { kind: 'silent share', deviation: Math.abs(own.silentShare - reference.silentShare), allowed: 0.05 },
      { kind: 'mean charge (relative)', deviation: relative(own.charge, reference.charge), allowed: 0.03 },
    ],
  };
}

function atShift(from: number, run: readonly HalfCycle[], pattern: readonly HalfCycle[], shift: number): Comparison {
  let angle = 0;
  let charge = 0;
  for (let k = from; k < run.length; k++) {
    const own = run[k] as HalfCycle;
    const expected = pattern[(k + shift) % pattern.length] as HalfCycle;
    if (own.firingAngles.length !== expected.firingAngles.length) {
      return { mismatch: `half-cycle ${k} fires at [${told(own)}], the reference at [${told(expected)}]`, figures: [] };
    }
    for (const [n, value] of own.firingAngles.entries()) angle = Math.max(angle, Math.abs(value - (expected.firingAngles[n] as number)));
    const ownCharge = own.charge * (k % 2 === 0 ? 1 : -1);
    charge = Math.max(charge, Math.abs(ownCharge - expected.charge) / Math.max(Math.abs(expected.charge), darkCharge));
  }
  return {
    mismatch: null,
    figures: [
      { kind: 'firing angle (degrees)', deviation: angle, allowed: acceptedAngle },
      { kind: 'charge per half-cycle (relative)', deviation: charge, allowed: acceptedCharge },
    ],
  };
}

const relative = (own: number, expected: number) => Math.abs(own / expected - 1);
const worst = ({ figures }: Comparison) => Math.max(...figures.map(({ deviation, allowed }) => deviation / allowed));
const told = ({ firingAngles }: HalfCycle) => firingAngles.map((angle) => angle.toFixed(2)).join(' ');
