/**
 * Turns a phase table into a lamp that can be simulated: input capacitor and static curve, or a reservoir lamp where the record is an
 * arc that ends near the crest. The residual is what the engine, running the fitted lamp undimmed, leaves of the recorded points; a
 * lamp that leaves too much is refused, with the reason.
 */
import type { Lamp, LampInput } from '../pairing.ts';
import { checkPhaseTable, type PhaseTable, pointWeights, tableMeans } from './phase-table.ts';
import { type ProfileOutcome, refused } from './profile-failures.ts';
import { FEWEST_ARC_POINTS, FITTED_DIGITS, LEAST_TROUGH_SHARE, RESIDUAL_LIMIT } from './profile-tolerances.ts';
import { tablePowerFault } from './recorded-power.ts';
import { conductionArc, fitReservoir, isReservoirArc } from './reservoir-fit.ts';
import { residualReason } from './residual-reason.ts';
import { fitStatic } from './static-fit.ts';
import { runUndimmed } from './undimmed-lamp.ts';

/** What an undimmed record cannot tell, so that it must be given or assumed. */
export interface FitGround {
  /** Ohm before the input capacitor */
  readonly seriesResistance: number;
  /** V at which a reservoir's drain stops */
  readonly minimumVoltage: number;
  /** W, null where not stated */
  readonly ratedPower: number | null;
}

export interface ProfileMeans {
  readonly rmsCurrent: number;
  readonly power: number;
  readonly powerFactor: number;
}

export interface ProfileFit {
  readonly form: 'iv-table' | 'reservoir';
  readonly lamp: Lamp;
  /** r.m.s. error over r.m.s. current, 0..1 */
  readonly residual: number;
  /** the residual of the form that was not chosen; null where it was not tried or cannot run */
  readonly otherResidual: number | null;
  readonly recorded: ProfileMeans;
  /** of the fitted lamp, simulated on the recorded sine */
  readonly fitted: ProfileMeans;
  /** what of the lamp did not come from the record, as places in it */
  readonly taken: readonly { readonly path: string; readonly basis: string }[];
}

const rounded = (value: number): number => Number(value.toPrecision(FITTED_DIGITS));

function inputOf(seriesResistance: number, capacitance: number): LampInput {
  return {
    seriesResistance,
    seriesCapacitance: 0,
    inductance: 0,
    inductorLoss: null,
    capacitance: rounded(capacitance),
    damper: null,
    bleeder: null,
  };
}

const NOT_IN_RECORD = 'an undimmed record cannot show it: as given, or the default';

type Candidate = Pick<ProfileFit, 'form' | 'lamp' | 'taken'>;

function staticLamp(fit: ReturnType<typeof fitStatic>, ground: FitGround): Candidate {
  return {
    form: 'iv-table',
    lamp: {
      ratedPower: ground.ratedPower,
      input: inputOf(ground.seriesResistance, fit.capacitance),
      load: { kind: 'iv-table', points: fit.points.map((p) => ({ voltage: rounded(p.voltage), current: rounded(p.current) })) },
    },
    taken: [{ path: 'input.seriesResistance', basis: NOT_IN_RECORD }],
  };
}

function reservoirLamp(fit: ReturnType<typeof fitReservoir>, ground: FitGround): Candidate {
  // only the sum shows; a surge resistor of next to nothing is left where the series resistor takes it all
  const seriesResistance = Math.min(ground.seriesResistance, rounded(0.95 * fit.resistance));
  const most = rounded(LEAST_TROUGH_SHARE * fit.trough);
  return {
    form: 'reservoir',
    lamp: {
      ratedPower: ground.ratedPower,
      input: inputOf(seriesResistance, fit.inputCapacitance),
      load: {
        kind: 'reservoir',
        capacitance: rounded(fit.capacitance),
        surgeResistance: rounded(fit.resistance - seriesResistance),
        drain: { kind: 'power', power: rounded(fit.power) },
        minimumVoltage: Math.min(ground.minimumVoltage, most),
      },
    },
    taken: [
      {
        path: 'input.seriesResistance',
        basis: 'the record shows only the sum with the surge resistance: as given, or the default, within that sum',
      },
      { path: 'load.minimumVoltage', basis: `${NOT_IN_RECORD}, below the lowest voltage that the reservoir was seen at` },
      { path: 'load.drain.kind', basis: 'taken as constant power: on one sine, constant current looks nearly the same' },
    ],
  };
}

interface Judged {
  readonly candidate: Candidate;
  readonly residual: number;
  readonly fitted: ProfileMeans;
  readonly errors: Float64Array;
}

/** the candidate's residual by simulation; null where it does not run */
function judged(candidate: Candidate, table: PhaseTable, rmsCurrent: number): Judged | null {
  const run = runUndimmed(candidate.lamp, table);
  if (run === null) return null;
  const weights = pointWeights(table);
  const errors = Float64Array.from(table.points, (p) => p.current - run.currentAt(p.phase));
  const squared = errors.reduce((sum, e, k) => sum + (weights[k] as number) * e * e, 0);
  const { power, rmsCurrent: rms, powerFactor } = run;
  return { candidate, residual: Math.sqrt(squared) / rmsCurrent, fitted: { power, rmsCurrent: rms, powerFactor }, errors };
}

export function fitPhaseTable(table: PhaseTable, ground: FitGround): ProfileOutcome<ProfileFit> {
  const issues = checkPhaseTable(table);
  for (const key of ['seriesResistance', 'minimumVoltage'] as const) {
    if (!(Number.isFinite(ground[key]) && ground[key] > 0))
      issues.push({ path: key, message: `must be a finite number above 0, not ${ground[key]}` });
  }
  if (issues.length > 0) return refused({ kind: 'invalid-profile', detail: 'The phase table cannot be fitted as given.', issues });
  const recorded = tableMeans(table);
  const powerless = tablePowerFault(recorded.power, ground.ratedPower);
  if (powerless !== null) return refused(powerless);
  const arc = conductionArc(table);
  if (arc.points < FEWEST_ARC_POINTS) {
    const detail = `Only ${arc.points} points of a half-cycle carry current, ${FEWEST_ARC_POINTS} are needed: record more points, or the shape between them is unknown.`;
    return refused({ kind: 'arc-not-resolved', detail, points: arc.points });
  }
  const candidates = [staticLamp(fitStatic(table, ground.seriesResistance), ground)];
  if (isReservoirArc(arc)) candidates.push(reservoirLamp(fitReservoir(table, arc), ground));
  const results = candidates.map((c) => judged(c, table, recorded.rmsCurrent)).filter((j) => j !== null);
  const [best, other] = results.toSorted((a, b) => a.residual - b.residual);
  if (best === undefined || !(best.residual <= RESIDUAL_LIMIT)) {
    const residual = best?.residual ?? 1;
    const detail =
      best === undefined
        ? 'No lamp fitted to this record comes to run steadily on an undimmed sine.'
        : residualReason(table, best.errors, best.candidate.form, residual);
    return refused({ kind: 'residual-too-large', detail, residual, limit: RESIDUAL_LIMIT });
  }
  return {
    ok: true,
    value: { ...best.candidate, residual: best.residual, otherResidual: other?.residual ?? null, recorded, fitted: best.fitted },
  };
}
