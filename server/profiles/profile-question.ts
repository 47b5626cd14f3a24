/** Converts a profile from the wire to the question that a thread answers, and its answer back. Nothing is judged and nothing stored. */
import type { FitGround, ScopeTable } from '../../model/index.ts';
import type { Profile, ProfileQuery, ProfileRequest } from '../schemas/profile.ts';
import type { FittedProfile, ProfileQuestion } from '../simulation/profile-fitting.ts';
import { fitToWire } from '../verdicts/lamp-to-wire.ts';
import { defaultFor, PHASE_TABLE_DEFAULTS, PHASE_TABLE_INPUT_DEFAULTS } from '../verdicts/pairing-defaults.ts';
import { tableToModel } from '../verdicts/pairing-to-model.ts';
import { shown } from '../verdicts/shown-figures.ts';

/** What the address says goes before what the body says. */
export function withQuery(asked: ProfileRequest, { units, columns, ...ground }: ProfileQuery): ProfileRequest {
  const stated = { ...asked, ...ground };
  if (stated.kind === 'phase-table') return stated;
  return {
    ...stated,
    ...(units === undefined ? {} : { units: byColumn(units, (unit) => unit) as typeof stated.units }),
    ...(columns === undefined ? {} : { columns: byColumn(columns, Number) }),
  };
}

function byColumn<T>(list: string, read: (text: string) => T): { readonly time: T; readonly voltage: T; readonly current: T } {
  const [time = '', voltage = '', current = ''] = list.split(',');
  return { time: read(time), voltage: read(voltage), current: read(current) };
}

export function profileQuestion(asked: ProfileRequest): ProfileQuestion {
  if (asked.kind === 'phase-table') {
    return { kind: asked.kind, table: tableToModel(asked), ground: groundAt(asked, asked.voltage_V) };
  }
  const { csv, units, columns } = asked;
  const stated = {
    units: { time: units?.time ?? null, voltage: units?.voltage ?? null, current: units?.current ?? null },
    places: { time: columns?.time ?? null, voltage: columns?.voltage ?? null, current: columns?.current ?? null },
  };
  return { kind: asked.kind, csv, stated, grounds: { high: groundAt(asked, HIGH_SUPPLY), low: groundAt(asked, LOW_SUPPLY) } };
}

/** V r.m.s., one of either kind of supply */
const HIGH_SUPPLY = 230;
const LOW_SUPPLY = 120;

function groundAt({ ratedPower_W, seriesResistance_Ohm, minimumVoltage_V }: ProfileRequest, voltage_V: number): FitGround {
  return {
    ratedPower: ratedPower_W ?? null,
    seriesResistance: seriesResistance_Ohm ?? defaultFor(PHASE_TABLE_INPUT_DEFAULTS.seriesResistance_Ohm, voltage_V),
    minimumVoltage: minimumVoltage_V ?? defaultFor(PHASE_TABLE_DEFAULTS.minimumVoltage_V, voltage_V),
  };
}

export function profileToWire(fitted: FittedProfile): Profile {
  return { ...fitToWire(fitted), scope: fitted.scope === null ? null : scopeToWire(fitted.scope) };
}

function scopeToWire(scope: ScopeTable): NonNullable<Profile['scope']> {
  const { table } = scope;
  return {
    periods: scope.periods,
    samplesPerPeriod: shown(scope.samplesPerPeriod),
    frequency_Hz: shown(table.frequency),
    voltage_V: shown(table.voltage),
    voltageOffset_V: shown(scope.voltageOffset),
    currentOffset_mA: shown(scope.currentOffset * 1e3),
    currentReversed: scope.currentReversed,
    noise_mA: shown(scope.noise * 1e3),
    points: table.points.map(({ phase, current }) => ({ phase_deg: shown(phase), current_mA: shown(current * 1e3) })),
  };
}
