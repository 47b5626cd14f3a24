/** Converts lamp counts, remedies and requirements from SI to the wire's units. */
import type { LampCounts, Remedies, Remedy, Requirement } from '../../model/index.ts';
import type { LampCountsAnswer } from '../schemas/lamp-counts.ts';
import type { RemediesAnswer } from '../schemas/remedy.ts';
import type { RequirementAnswer } from '../schemas/requirement.ts';
import type { AskedJudgement, OfOneCircuit } from '../simulation/asked-circuit.ts';
import { shown, shownOrNull } from './shown-figures.ts';
import { valueToWire } from './would-settle-to-wire.ts';

export function lampCountsToWire(judged: OfOneCircuit<LampCounts> & { readonly group: number }): LampCountsAnswer {
  const { group, circuit, counts, smallest, largest, unbroken, below, above, summary } = judged;
  return {
    group,
    circuit,
    counts: counts.map(({ lowestDial, ...graded }) => ({ ...graded, lowestDial_pct: lowestDial })),
    smallest,
    largest,
    unbroken,
    below,
    above,
    summary,
  };
}

/** `assumed`: wire paths of the values that were filled in */
export function remediesToWire(
  { circuit, grade, remedies, tried, summary }: OfOneCircuit<Remedies>,
  assumed: readonly string[],
): RemediesAnswer {
  return {
    circuit,
    grade,
    found: remedies.map((remedy) => remedyToWire(remedy, assumed)),
    tried: tried.map(({ kind, candidates }) => ({ kind, candidates })),
    summary,
  };
}

function remedyToWire(remedy: Remedy, assumed: readonly string[]): RemediesAnswer['found'][number] {
  const { grade, lowestDial, power, parts, detail } = remedy;
  // absent in a verdict that was recorded before remedies were asked this
  const settles = remedy.hingesOn ?? null;
  const hingesOn = settles === null ? null : valueToWire(settles, assumed);
  const outcome = { grade, lowestDial_pct: lowestDial, power_W: shown(power), parts, hingesOn, detail };
  switch (remedy.kind) {
    case 'low-end-trim':
      return { kind: remedy.kind, ...outcome, position_pct: remedy.position };
    case 'added-resistor':
      return { kind: remedy.kind, ...outcome, resistance_kOhm: shown(remedy.resistance / 1e3), ...heatOf(remedy) };
    case 'bypass':
      return {
        kind: remedy.kind,
        ...outcome,
        resistance_Ohm: shown(remedy.resistance),
        capacitance_nF: shown(remedy.capacitance * 1e9),
        ...heatOf(remedy),
        capacitorClass_V: remedy.capacitorClass,
        peakVoltage_V: shown(remedy.peakVoltage),
      };
    case 'more-lamps':
      return { kind: remedy.kind, ...outcome, group: remedy.group, added: remedy.added };
  }
}

function heatOf({ hottestAt, ratedPower }: Extract<Remedy, { kind: 'added-resistor' | 'bypass' }>) {
  return { hottestAt_pct: hottestAt, ratedPower_W: ratedPower };
}

/** Of a verdict and its requirement; the lamps are those of the circuit that the verdict shows. */
export function requirementAnswer(
  { id, modelVersion, createdAt }: { readonly id: string; readonly modelVersion: string; readonly createdAt: string },
  { variants }: Pick<AskedJudgement, 'variants'>,
  { points, summary }: Requirement,
): RequirementAnswer {
  return {
    verdictId: id,
    modelVersion,
    createdAt,
    circuit: variants.find(({ shown: isShown }) => isShown)?.name ?? null,
    points: points.map(({ latchingCurrent, holdingCurrent, failsAt, decidedBy, cause, smallerDoes }) => ({
      latchingCurrent_mA: shown(latchingCurrent * 1e3),
      holdingCurrent_mA: shown(holdingCurrent * 1e3),
      failsAt: shownOrNull(failsAt),
      decidedBy,
      cause,
      smallerDoes,
    })),
    summary,
  };
}
