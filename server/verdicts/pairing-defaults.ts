/**
 * Every default a pairing is completed with, in wire units, each with the ground it stands on. The OpenAPI document's field texts and
 * a verdict's `assumptions` both come from here, so that neither can say anything else than what is filled in.
 */
import { DROP_OUT_ANGLE, type Mains, supplyBand } from '../../model/index.ts';

export interface Default<T> {
  /** for supplies of 180 V and more, and for those below */
  readonly at230: T;
  readonly at120: T;
  readonly basis: string;
}

type Settings = { readonly [field: string]: Default<unknown> };

/** V r.m.s.; the two sets of generic values are for 220-240 V and for 100-127 V supplies, and nothing is sold between them. */
const HIGH_SUPPLY_FROM = 180;

export function defaultFor<T>(fallback: Default<T>, mainsVoltage_V: number): T {
  return mainsVoltage_V >= HIGH_SUPPLY_FROM ? fallback.at230 : fallback.at120;
}

/** A default as the field texts say it. */
export function defaultText(fallback: Default<unknown>): string {
  const { at230, at120, basis } = fallback;
  const value = Object.is(at230, at120)
    ? `${JSON.stringify(at230)}`
    : `${JSON.stringify(at230)} from ${HIGH_SUPPLY_FROM} V mains up, else ${JSON.stringify(at120)}`;
  return `Default ${value} (${basis}).`;
}

function always<T>(value: T, basis: string): Default<T> {
  return { at230: value, at120: value, basis };
}

const GENERIC = 'generic value, from memory';

export const MAINS_DEFAULTS = {
  sourceResistance_Ohm: always(0.5, 'wiring of an ordinary final circuit, from memory'),
} satisfies Settings;

export const DIMMER_DEFAULTS = {
  turnOffTime_us: always(15, 'order of a triac turn-off time, from memory: a faster ring through zero does not turn a triac off'),
  onVoltage_V: always(1, GENERIC),
  onResistance_Ohm: always(0.05, GENERIC),
  wiring: always<'two-wire' | 'three-wire'>('two-wire', 'most wall boxes have no neutral'),
  interferenceCapacitance_nF: always(0, 'taken as having none'),
} satisfies Settings;

export const CHOKE_DEFAULTS = {
  inductance_mH: always(0.1, GENERIC),
  resistance_Ohm: always(0.2, GENERIC),
  lossResistance_kOhm: always<number | null>(1, 'core loss of about 1 kOhm per 0.1-1 mH, from memory'),
} satisfies Settings;

export const SNUBBER_DEFAULTS = {
  resistance_Ohm: always(100, GENERIC),
  capacitance_nF: always(33, GENERIC),
} satisfies Settings;

const UNRATED = 'not stated, so not checked';

export const RATINGS_DEFAULTS = {
  maximumCurrent_A: always<number | null>(null, UNRATED),
  maximumPeakCurrent_A: always<number | null>(null, UNRATED),
  minimumLoad_W: always<number | null>(null, UNRATED),
  maximumLoad_W: always<number | null>(null, UNRATED),
} satisfies Settings;

export const DRIVE_KIND_DEFAULT = always<'diac' | 'timed'>('diac', 'the usual drive of a rotary dimmer');

export const DIAC_DEFAULTS = {
  fixedResistance_kOhm: {
    at230: 22,
    at120: 10,
    basis:
      'from memory; leaves a gap of about 24 degrees at full dial, as is common practice, so that no dimmer fires again just before the zero crossing',
  },
  potentiometer_kOhm: { at230: 330, at120: 150, basis: GENERIC },
  capacitance_nF: always(100, GENERIC),
  breakover_V: always(32, 'nominal breakover of the common diac, from memory'),
  residual_V: always(12, GENERIC),
  diacResistance_Ohm: always(10, GENERIC),
  diacHoldingCurrent_mA: always(5, 'several mA: near 1 mA the timing resistor alone keeps a diac on'),
  gateResistance_Ohm: always(100, GENERIC),
  gateVoltage_V: always(0.9, GENERIC),
  gateThreshold_mA: always(15, GENERIC),
} satisfies Settings;

export const SECOND_SECTION_DEFAULT = always(null, 'taken as having one timing section');

export const TIMED_DEFAULTS = {
  firingAngleFull_deg: always(20, GENERIC),
  firingAngleLow_deg: always(150, GENERIC),
  gatePulse_us: always(100, GENERIC),
  pulses: always<'single' | 'train' | 'held'>('single', 'the least that a drive can do'),
  pulseSpacing_us: always(500, GENERIC),
} satisfies Settings;

const NO_INPUT_PART = {
  seriesCapacitance_nF: always(0, 'taken as having none'),
  inductance_mH: always(0, 'taken as having none'),
  damper: always(null, 'taken as having none'),
  bleeder: always(null, 'taken as having none'),
} satisfies Settings;

const FUSIBLE = 'usual fusible resistor, from memory';

/** by the kind of load behind the input */
export const LAMP_INPUT_DEFAULTS = {
  resistive: {
    seriesResistance_Ohm: always(0.1, 'a filament has leads and nothing else before it'),
    capacitance_nF: always(0, 'a filament lamp has no input capacitor'),
    ...NO_INPUT_PART,
  },
  'iv-table': {
    seriesResistance_Ohm: always(22, FUSIBLE),
    capacitance_nF: { at230: 47, at120: 100, basis: 'usual film capacitor, from memory' },
    ...NO_INPUT_PART,
  },
  reservoir: {
    seriesResistance_Ohm: always(22, FUSIBLE),
    capacitance_nF: always(22, 'usual film capacitor, from memory'),
    ...NO_INPUT_PART,
  },
} satisfies { readonly [kind: string]: Settings };

/** An inductor in the lamp's input without a stated loss: 1 kOhm for each mH, at least 1 kOhm. Without an inductor there is none. */
export function inductorLossDefault(inductance_mH: number): Default<number | null> {
  return inductance_mH === 0
    ? always<number | null>(null, 'no inductor')
    : always<number | null>(Math.max(1, inductance_mH), 'core loss of about 1 kOhm per mH, from memory');
}

export const RESERVOIR_DEFAULTS = {
  surgeResistance_Ohm: always(1, 'taken as limited by the series resistor of the input'),
  minimumVoltage_V: { at230: 50, at120: 25, basis: 'converters stop at a fraction of the mains peak, from memory' },
} satisfies Settings;

/** What an undimmed record cannot tell of the lamp it is of. */
export const PHASE_TABLE_DEFAULTS = {
  minimumVoltage_V: RESERVOIR_DEFAULTS.minimumVoltage_V,
} satisfies Settings;

export const PHASE_TABLE_INPUT_DEFAULTS = {
  seriesResistance_Ohm: LAMP_INPUT_DEFAULTS['iv-table'].seriesResistance_Ohm,
} satisfies Settings;

/** Ohm; ends of the usual range of a lamp's series resistor, which a recorded reservoir lamp is also fitted with where it was not given */
export const SERIES_RESISTANCE_RANGE: Default<readonly [number, number]> = { at230: [10, 47], at120: [4.7, 22], basis: GENERIC };

export const POWER_FACTOR_DEFAULT = always<number | null>(null, 'not stated: every circuit of the class is judged');

export const RATED_DEFAULTS = {
  ratedPower_W: always<number | null>(null, 'not stated'),
  ratedVoltage_V: always<number | null>(null, 'not stated'),
} satisfies Settings;

export const OPTIONS_DEFAULTS = {
  dialPositions_pct: always<readonly number[]>(
    Array.from({ length: 21 }, (_, step) => step * 5),
    'the whole dial in steps of 5 %',
  ),
  dropOutAngle_deg: always(DROP_OUT_ANGLE, 'our choice, the model says why'),
  corners: always<'all' | 'nominal'>('all', 'a verdict at nominal mains alone says less'),
} satisfies Settings;

/** %, of the nominal voltage */
export function supplyBandDefaults(mains: Pick<Mains, 'voltage' | 'frequency'>) {
  const { low, high, source } = supplyBand({ ...mains, sourceResistance: 0 });
  const percent = (share: number): number => Number((100 * share).toPrecision(6));
  return { low_pct: always(percent(low), source), high_pct: always(percent(high), source) } satisfies Settings;
}
