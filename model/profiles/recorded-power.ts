/** Holds the power that a record comes to against the rated one, or against what any lamp takes: a mistaken unit or probe factor shows there. */
import type { ProfileFailure } from './profile-failures.ts';
import { LAMP_POWER, POWER_SPREAD, UNIT_SPREAD } from './profile-tolerances.ts';

const figures = (value: number): string => String(Number(value.toPrecision(3)));
const within = (value: number, [from, to]: readonly [number, number]): boolean => value >= from && value <= to;

type PowerFault = Extract<ProfileFailure, { kind: 'wrong-units' | 'power-disagrees' }>;

export function powerFault(power: number, ratedPower: number | null): PowerFault | null {
  if (ratedPower === null) {
    if (within(power, LAMP_POWER)) return null;
    const detail = `The record comes to ${figures(power)} W, which is no lamp's: check whether the current is in A or in mA, and the probe's factor.`;
    return { kind: 'wrong-units', detail, factor: null };
  }
  const factor = power / ratedPower;
  const said = `The record comes to ${figures(power)} W where ${figures(ratedPower)} W are rated`;
  for (const [unit, mistaken] of [
    [1000, 'amperes where milliamperes were meant'],
    [0.001, 'milliamperes where amperes were meant'],
  ] as const) {
    if (!within(factor / unit, [1 / UNIT_SPREAD, UNIT_SPREAD])) continue;
    return { kind: 'wrong-units', detail: `${said}, ${figures(factor)} times as much: the current is probably in ${mistaken}.`, factor };
  }
  if (within(factor, [1 / POWER_SPREAD, POWER_SPREAD])) return null;
  return {
    kind: 'power-disagrees',
    detail: `${said}, ${figures(factor)} times as much: check the probe's factor, and that it is this lamp.`,
    factor,
  };
}

/** The same of a phase table, whose polarity is not turned round either. */
export function tablePowerFault(power: number, ratedPower: number | null): Extract<ProfileFailure, { kind: 'table-power' }> | null {
  if (power < 0) {
    const detail = `The current runs against the voltage, which would be ${figures(-power)} W out of the lamp: change its sign, and count the phase from the rising zero crossing.`;
    return { kind: 'table-power', detail, power };
  }
  const fault = powerFault(power, ratedPower);
  if (fault === null) return null;
  if (ratedPower === null || fault.kind !== 'wrong-units') return { kind: 'table-power', detail: fault.detail, power };
  const unit = power < ratedPower ? 'amperes' : 'microamperes';
  const detail = `The phase table comes to ${figures(power)} W where ${figures(ratedPower)} W are rated: its currents are probably in ${unit}, and it takes milliamperes.`;
  return { kind: 'table-power', detail, power };
}
