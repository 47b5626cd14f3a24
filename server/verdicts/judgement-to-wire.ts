/** Converts what the model says from SI to the wire's units and field names, and puts a whole verdict together. */
import type { CornerResult, DialRow, PerPolarity, VariantGrade, Waveforms } from '../../model/index.ts';
import type { JudgedPairing } from '../schemas/pairing.ts';
import type { Evidence, Verdict } from '../schemas/verdict.ts';
import type { WaveformsAnswer } from '../schemas/verdict-calls.ts';
import type { AskedJudgement, FoundLamp } from '../simulation/asked-circuit.ts';
import { candidateName } from '../simulation/possible-circuits.ts';
import { CAUTIONS } from './cautions.ts';
import { withFitAssumptions } from './fit-assumptions.ts';
import { fitToWire } from './lamp-to-wire.ts';
import { MODEL_ASSUMPTIONS } from './model-assumptions.ts';
import type { Assumption } from './pairing-completion.ts';
import { lampCountsToWire, remediesToWire } from './remedies-to-wire.ts';
import { percentOrNull, shown, shownOrNull } from './shown-figures.ts';
import { wouldSettleToWire } from './would-settle-to-wire.ts';

/** `assumed`: wire paths of the values that were filled in */
export function toWire(judgement: AskedJudgement, assumed: readonly string[]): Evidence {
  const { popOn, counters, foundLamps, lampCounts, remedies, wouldSettle } = judgement;
  const { halfCycles, steps, events, modesBuilt, stops, sparedStops } = counters;
  return {
    grade: judgement.grade,
    summary: judgement.summary,
    conditions: judgement.conditions.map(({ kind, position, detail }) => ({ kind, position_pct: position, detail })),
    reasons: judgement.reasons.map(({ code, dial, detail, corner }) => ({
      code,
      corner: corner ?? 'nominal',
      dial_pct: dial === null ? null : [...dial],
      detail,
    })),
    dial: judgement.dial.map(rowToWire),
    popOn: { litFrom_pct: popOn.litFrom, outBelow_pct: popOn.outBelow },
    corners: judgement.corners.map(cornerToWire),
    sparedCorners: [...judgement.sparedCorners],
    decidedBy: judgement.decidedBy,
    wouldSettle: wouldSettle === null ? null : wouldSettleToWire(wouldSettle, assumed),
    variants: judgement.variants.map(variantToWire),
    lampClasses: foundLamps.flatMap(classToWire),
    fits: foundLamps.flatMap((lamp) => (lamp.known === 'record' ? [{ path: lampPath(lamp), ...fitToWire(lamp) }] : [])),
    lampCounts: lampCounts === null ? null : lampCountsToWire(lampCounts),
    remedies: remedies === null ? null : remediesToWire(remedies, assumed),
    counters: { halfCycles, steps, events, modesBuilt, stops, sparedStops },
  };
}

const lampPath = ({ group }: FoundLamp): string => `lamps[${group}].lamp`;

function cornerToWire({
  name,
  mainsVoltage,
  latchingCurrent,
  holdingCurrent,
  grade,
  lowestDial,
}: CornerResult): Evidence['corners'][number] {
  const milli = ({ positive, negative }: PerPolarity) => ({ positive: shown(positive * 1e3), negative: shown(negative * 1e3) });
  return {
    name,
    mainsVoltage_V: shown(mainsVoltage),
    latchingCurrent_mA: milli(latchingCurrent),
    holdingCurrent_mA: milli(holdingCurrent),
    grade,
    lowestDial_pct: lowestDial,
  };
}

function variantToWire({ name, grade, decidedBy, lowestDial, shown: isShown }: VariantGrade): Evidence['variants'][number] {
  return { name, grade, decidedBy, lowestDial_pct: lowestDial, shown: isShown };
}

function classToWire(lamp: FoundLamp): Evidence['lampClasses'] {
  if (lamp.known !== 'class') return [];
  const { lampClass, spans, ask, candidates } = lamp;
  const told = candidates.map(({ name, basis, power, powerFactor }) => ({
    name: candidateName({ name, powerFactor }),
    basis,
    power_W: shown(power),
    powerFactor: shown(powerFactor),
  }));
  return [{ path: lampPath(lamp), class: lampClass, spans, ask, candidates: told }];
}

function rowToWire(row: DialRow): Evidence['dial'][number] {
  return {
    sweep: row.sweep,
    position_pct: row.position,
    state: row.state,
    alsoStates: [...row.alsoStates],
    firings: { min: row.firings.min, mean: shown(row.firings.mean), max: row.firings.max },
    silentShare: shown(row.silentShare),
    repeatsAfter_halfCycles: row.repeatsAfter,
    settled_halfCycles: row.settled,
    observed_halfCycles: row.observed,
    failedLatches: shown(row.failedLatches),
    earlyDropOuts: shown(row.earlyDropOuts),
    firingAngle_deg: shownOrNull(row.firingAngle),
    firingAngleSpread_deg: shownOrNull(row.firingAngleSpread),
    conductionAngle_deg: shownOrNull(row.conductionAngle),
    polarityDifference_pct: shown(row.polarityDifference * 100),
    variation_pct: shown(row.variation * 100),
    lampPower_W: shown(row.lampPower),
    rmsCurrent_mA: shown(row.rmsCurrent * 1e3),
    peakCurrent_A: shown(row.peakCurrent),
    dcCurrent_mA: shown(row.dcCurrent * 1e3),
    diacStuck: row.diacStuck,
    margins: {
      latching_pct: percentOrNull(row.margins.latching),
      holding_pct: percentOrNull(row.margins.holding),
      breakover_pct: percentOrNull(row.margins.breakover),
    },
    nearEdge: row.nearEdge,
  };
}

export interface VerdictParts {
  readonly id: string;
  readonly modelVersion: string;
  readonly createdAt: string;
  readonly pairing: JudgedPairing;
  /** the defaults that were filled in; what the model takes for granted is added here */
  readonly assumptions: readonly Assumption[];
  readonly judgement: AskedJudgement;
}

export function verdictToWire(parts: VerdictParts): Verdict {
  const assumed = parts.assumptions.map(({ path }) => path);
  const { grade, summary, ...evidence } = toWire(parts.judgement, assumed);
  return {
    id: parts.id,
    modelVersion: parts.modelVersion,
    createdAt: parts.createdAt,
    grade,
    summary,
    ...evidence,
    pairing: parts.pairing,
    assumptions: [...withFitAssumptions(parts.assumptions, parts.judgement.foundLamps), ...MODEL_ASSUMPTIONS].map(
      ({ path, value, basis }) => ({
        path,
        value: typeof value === 'object' && value !== null ? [...value] : value,
        basis,
      }),
    ),
    cautions: [...CAUTIONS],
  };
}

export function waveformsToWire(recorded: Waveforms): Pick<WaveformsAnswer, 'sweep' | 'dial_pct' | 'columns'> {
  const column = (values: Float64Array, factor = 1): number[] => Array.from(values, (value) => shown(value * factor));
  return {
    sweep: recorded.sweep,
    dial_pct: recorded.position,
    columns: {
      time_ms: column(recorded.time, 1e3),
      mainsVoltage_V: column(recorded.mainsVoltage),
      lampVoltage_V: column(recorded.lampVoltage),
      lampCurrent_mA: column(recorded.lampCurrent, 1e3),
      dimmerCurrent_mA: column(recorded.dimmerCurrent, 1e3),
      timingVoltage_V: column(recorded.timingVoltage),
      gateCurrent_mA: column(recorded.gateCurrent, 1e3),
    },
  };
}
