/**
 * Looks for the largest preferred resistor across the lamps that cures the pairing, so the one with the least heat: down a coarse
 * ladder of values first, then through the finer values above the first that does.
 */
import type { AddedLoad, Pairing } from '../../pairing.ts';
import type { CornerInputs, Remedy } from '../../verdict.ts';
import { cornersOf } from '../corners.ts';
import { LEAST_ADDED_POWER, MOST_ADDED_POWER, POWER_MARGIN, POWER_RATINGS } from '../judgement-figures.ts';
import { E12, E24, preferredValues } from '../preferred-values.ts';
import { addedLoadHeat } from './added-load-heat.ts';
import { outcomeOf, type Patient, type Trial } from './candidate.ts';
import type { Search } from './search.ts';

/** of the coarse ladder every third value is tried: a factor of about 1.8 */
const COARSE = 3;

export function highCorner(patient: Patient): CornerInputs {
  return cornersOf(patient.pairing, patient.options).reduce((a, b) => (b.mainsVoltage > a.mainsVoltage ? b : a));
}

/** W to buy for so much heat, null where no usual rating is enough */
export function ratingFor(power: number): number | null {
  return POWER_RATINGS.find((rating) => rating >= POWER_MARGIN * power) ?? null;
}

/** the added load that a pairing has is left out where another is tried */
export const insteadOf = ({ pairing }: Patient): string => (pairing.addedLoad === null ? '' : ', in place of the load that is there now');

const figure = (value: number, digits = 3): string => String(Number(value.toPrecision(digits)));
const ohms = (value: number): string => (value < 1000 ? `${figure(value)} Ohm` : `${figure(value / 1000)} kOhm`);

const withResistor = (pairing: Pairing, resistance: number): Pairing => ({ ...pairing, addedLoad: { kind: 'resistor', resistance } });

function describe(patient: Patient, resistance: number, trial: Trial): Remedy | null {
  const load: AddedLoad = { kind: 'resistor', resistance };
  const heat = addedLoadHeat(patient.pairing, load, highCorner(patient), patient.options, patient.effort);
  const ratedPower = ratingFor(heat.power);
  if (ratedPower === null) return null;
  return {
    kind: 'added-resistor',
    resistance,
    hottestAt: heat.position,
    ratedPower,
    power: heat.power,
    parts: 1,
    ...outcomeOf(
      patient,
      trial,
      `Connect ${ohms(resistance)} across the lamps${insteadOf(patient)}. It turns up to ${figure(heat.power)} W to heat: buy at least ${figure(ratedPower)} W, made for mains voltage, and mount it where it may run hot.`,
    ),
  };
}

export function addedResistor(patient: Patient): Search {
  const { voltage } = patient.pairing.mains;
  const [low, high] = [voltage ** 2 / MOST_ADDED_POWER, voltage ** 2 / LEAST_ADDED_POWER];
  const coarse = preferredValues(E12, low, high)
    .toReversed()
    .filter((_, k) => k % COARSE === 0);
  let candidates = 0;
  let partial: { resistance: number; trial: Trial } | null = null;
  const cures = (resistance: number): Trial | null => {
    candidates++;
    const trial = patient.try(withResistor(patient.pairing, resistance));
    if (trial !== null && trial.grade !== 'suitable') partial ??= { resistance, trial };
    return trial?.grade === 'suitable' ? trial : null;
  };
  let above = high;
  for (const resistance of coarse) {
    const trial = cures(resistance);
    if (trial === null) {
      above = resistance;
      continue;
    }
    const finer = preferredValues(E24, resistance, above).filter((r) => r > resistance && r < above);
    for (const r of finer.toReversed()) {
      const fine = cures(r);
      if (fine !== null) return { kind: 'added-resistor', candidates, remedy: describe(patient, r, fine) };
    }
    return { kind: 'added-resistor', candidates, remedy: describe(patient, resistance, trial) };
  }
  const second = partial as { resistance: number; trial: Trial } | null;
  return { kind: 'added-resistor', candidates, remedy: second === null ? null : describe(patient, second.resistance, second.trial) };
}
