/** Converts what the model says from SI to the wire's units and field names, and puts a whole verdict together. */
import type { DialRow, Judgement, Waveforms } from '../../model/index.ts';
import type { JudgedPairing } from '../schemas/pairing.ts';
import type { Evidence, Verdict } from '../schemas/verdict.ts';
import type { WaveformsAnswer } from '../schemas/verdict-calls.ts';
import { CAUTIONS } from './cautions.ts';
import { MODEL_ASSUMPTIONS } from './model-assumptions.ts';
import type { Assumption } from './pairing-completion.ts';

/**
 * Seven significant digits and no less than a millionth of the wire's unit: finer than the model's accuracy, short enough to read, and
 * the rounding noise of a symmetrical circuit reads as the 0 it is.
 */
function shown(value: number): number {
  return Number(Number(value.toPrecision(7)).toFixed(6));
}

const shownOrNull = (value: number | null): number | null => (value === null ? null : shown(value));

export function toWire(judgement: Judgement): Evidence {
  const { popOn, counters } = judgement;
  return {
    grade: judgement.grade,
    summary: judgement.summary,
    conditions: judgement.conditions.map(({ kind, position, detail }) => ({ kind, position_pct: position, detail })),
    reasons: judgement.reasons.map(({ code, dial, detail }) => ({ code, dial_pct: dial === null ? null : [...dial], detail })),
    dial: judgement.dial.map(rowToWire),
    popOn: { litFrom_pct: popOn.litFrom, outBelow_pct: popOn.outBelow },
    corners: judgement.corners.map(({ name, grade }) => ({ name, grade })),
    counters: { halfCycles: counters.halfCycles, steps: counters.steps, events: counters.events, modesBuilt: counters.modesBuilt },
  };
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
  };
}

export interface VerdictParts {
  readonly id: string;
  readonly modelVersion: string;
  readonly createdAt: string;
  readonly pairing: JudgedPairing;
  /** the defaults that were filled in; what the model takes for granted is added here */
  readonly assumptions: readonly Assumption[];
  readonly judgement: Judgement;
}

export function verdictToWire(parts: VerdictParts): Verdict {
  const { grade, summary, ...evidence } = toWire(parts.judgement);
  return {
    id: parts.id,
    modelVersion: parts.modelVersion,
    createdAt: parts.createdAt,
    grade,
    summary,
    ...evidence,
    pairing: parts.pairing,
    assumptions: [...parts.assumptions, ...MODEL_ASSUMPTIONS].map(({ path, value, basis }) => ({
      path,
      value: typeof value === 'object' && value !== null ? [...value] : value,
      basis,
    })),
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
