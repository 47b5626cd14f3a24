/**
 * Turns a lamp known only by its class and rating into the few circuits that span the class, each drawing the rated power undimmed.
 * A stated power factor narrows the range: each circuit is run undimmed at places along its range, and the ends of what fits are kept.
 */
import type { Lamp } from '../pairing.ts';
import type { ClassCircuit, ClassRange, Rating } from './class-circuit.ts';
import { CORRECTED_CONVERTER } from './class-corrected-converter.ts';
import { FILAMENT } from './class-filament.ts';
import { LINEAR_STRING } from './class-linear-string.ts';
import { RESERVOIR_DRIVER } from './class-reservoir-driver.ts';
import { SERIES_CAPACITOR_DROPPER } from './class-series-capacitor-dropper.ts';
import { LAMP_CLASSES, type LampClass } from './lamp-class.ts';
import { type ProfileOutcome, refused } from './profile-failures.ts';
import { CLASS_POWER_TOLERANCE, POWER_FACTOR_ABOVE, POWER_FACTOR_BELOW, RANGE_PLACES, SCALE_ROUNDS } from './profile-tolerances.ts';
import { runUndimmed, type UndimmedLamp } from './undimmed-lamp.ts';

export interface ClassLamp extends Rating {
  readonly lampClass: LampClass;
  /** 0..1, null where not stated */
  readonly powerFactor: number | null;
}

export interface ClassCandidate {
  readonly name: string;
  readonly basis: string;
  /** place of the circuit's range, 0..1 */
  readonly place: number;
  readonly lamp: Lamp;
  /** undimmed, simulated */
  readonly power: number;
  readonly powerFactor: number;
}

export interface ClassLamps {
  readonly lampClass: LampClass;
  readonly spans: string;
  readonly ask: string;
  readonly candidates: readonly ClassCandidate[];
}

const RANGES: { readonly [name in LampClass]: ClassRange } = {
  'reservoir-driver': RESERVOIR_DRIVER,
  'corrected-converter': CORRECTED_CONVERTER,
  'linear-string': LINEAR_STRING,
  'series-capacitor-dropper': SERIES_CAPACITOR_DROPPER,
  filament: FILAMENT,
};

/** the circuit at a place of its range, brought to the rated power; null where no scale does that */
function atRatedPower(circuit: ClassCircuit, rating: Rating, place: number): ClassCandidate | null {
  let scale = 1;
  for (let round = 0; round < SCALE_ROUNDS; round++) {
    const lamp = circuit.lamp(rating, place, scale);
    const run: UndimmedLamp | null = runUndimmed(lamp, rating);
    if (run === null || !(run.power > 0)) return null;
    if (Math.abs(run.power / rating.power - 1) <= CLASS_POWER_TOLERANCE) {
      return { name: circuit.name, basis: circuit.basis, place, lamp, power: run.power, powerFactor: run.powerFactor };
    }
    scale *= rating.power / run.power;
  }
  return null;
}

function sameLamp(a: ClassCandidate, b: ClassCandidate): boolean {
  return JSON.stringify(a.lamp) === JSON.stringify(b.lamp);
}

function checkClassLamp(asked: ClassLamp): { path: string; message: string }[] {
  const issues: { path: string; message: string }[] = [];
  for (const key of ['power', 'voltage', 'frequency'] as const) {
    if (!(Number.isFinite(asked[key]) && asked[key] > 0))
      issues.push({ path: key, message: `must be a finite number above 0, not ${asked[key]}` });
  }
  const { powerFactor } = asked;
  if (powerFactor !== null && !(powerFactor > 0 && powerFactor <= 1)) {
    issues.push({ path: 'powerFactor', message: `must lie above 0, up to 1, not ${powerFactor}` });
  }
  if (!LAMP_CLASSES.includes(asked.lampClass)) issues.push({ path: 'lampClass', message: `must be one of ${LAMP_CLASSES.join(', ')}` });
  return issues;
}

export function lampsOfClass(asked: ClassLamp): ProfileOutcome<ClassLamps> {
  const issues = checkClassLamp(asked);
  if (issues.length > 0) return refused({ kind: 'invalid-profile', detail: 'The class cannot be worked out as given.', issues });
  const { lampClass, powerFactor } = asked;
  const range = RANGES[lampClass];
  const evenly = Array.from({ length: RANGE_PLACES }, (_, k) => k / (RANGE_PLACES - 1));
  const met: ClassCandidate[] = [];
  const candidates = range.circuits.flatMap((circuit) => {
    const run = (powerFactor === null ? circuit.places : evenly)
      .map((place) => atRatedPower(circuit, asked, place))
      .filter((c) => c !== null);
    met.push(...run);
    if (powerFactor === null) return run;
    const fitting = run.filter(
      (c) => c.powerFactor >= powerFactor - POWER_FACTOR_BELOW && c.powerFactor <= powerFactor + POWER_FACTOR_ABOVE,
    );
    return fitting.filter((c, k) => k === 0 || (k === fitting.length - 1 && !sameLamp(c, fitting[0] as ClassCandidate)));
  });
  if (candidates.length === 0) {
    const factors = met.map((c) => c.powerFactor);
    const span = [Math.min(...factors), Math.max(...factors)] as const;
    const detail =
      met.length === 0
        ? `No circuit of the class ${lampClass} draws ${asked.power} W from ${asked.voltage} V.`
        : `No circuit of the class ${lampClass} has a power factor of ${powerFactor}: at ${asked.power} W they have ${span[0].toFixed(2)} to ${span[1].toFixed(2)}.`;
    return refused({ kind: 'class-does-not-fit', detail, lampClass, range: met.length === 0 ? [0, 0] : span });
  }
  return { ok: true, value: { lampClass, spans: range.spans, ask: range.ask, candidates } };
}
