/** Looks for the smallest capacitor with a series resistor across the lamps that cures the pairing. */
import type { AddedLoad } from '../../pairing.ts';
import type { Remedy } from '../../verdict.ts';
import { BYPASS_CAPACITANCES, BYPASS_RESISTANCES, CAPACITOR_CLASSES } from '../judgement-figures.ts';
import { addedLoadHeat } from './added-load-heat.ts';
import { highCorner, insteadOf, ratingFor } from './added-resistor.ts';
import { outcomeOf, type Patient, type Trial } from './candidate.ts';
import type { Search } from './search.ts';

const figure = (value: number): string => String(Number(value.toPrecision(3)));

function describe(patient: Patient, load: AddedLoad & { kind: 'resistor-capacitor' }, trial: Trial): Remedy | null {
  const corner = highCorner(patient);
  const heat = addedLoadHeat(patient.pairing, load, corner, patient.options, patient.effort);
  const ratedPower = ratingFor(heat.power);
  if (ratedPower === null) return null;
  const capacitorClass = CAPACITOR_CLASSES.find((c) => c >= corner.mainsVoltage) ?? null;
  const kind =
    capacitorClass === null ? 'a capacitor made for this mains voltage' : `a class X2 capacitor for ${capacitorClass} V AC or more`;
  return {
    kind: 'bypass',
    resistance: load.resistance,
    capacitance: load.capacitance,
    hottestAt: heat.position,
    ratedPower,
    capacitorClass,
    peakVoltage: heat.peakVoltage,
    power: heat.power,
    parts: 2,
    ...outcomeOf(
      patient,
      trial,
      `Connect ${figure(load.resistance)} Ohm in series with ${figure(load.capacitance * 1e9)} nF across the lamps${insteadOf(patient)}: ${kind}, and a pulse-proof resistor of at least ${figure(ratedPower)} W (it turns up to ${figure(heat.power)} W to heat).`,
    ),
  };
}

export function bypass(patient: Patient): Search {
  let candidates = 0;
  let partial: { load: AddedLoad & { kind: 'resistor-capacitor' }; trial: Trial } | null = null;
  for (const capacitance of BYPASS_CAPACITANCES) {
    for (const resistance of BYPASS_RESISTANCES) {
      candidates++;
      const load = { kind: 'resistor-capacitor', resistance, capacitance } as const;
      const trial = patient.try({ ...patient.pairing, addedLoad: load });
      if (trial === null) continue;
      if (trial.grade === 'suitable') return { kind: 'bypass', candidates, remedy: describe(patient, load, trial) };
      partial ??= { load, trial };
    }
  }
  return { kind: 'bypass', candidates, remedy: partial === null ? null : describe(patient, partial.load, partial.trial) };
}
