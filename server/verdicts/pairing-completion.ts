/**
 * Fills every default of an asked pairing in, and lists what was filled in. The result is canonical: what means the same is written
 * the same, and completing it again changes nothing and assumes nothing.
 */
import type { AskedDimmer, AskedLamp, AskedPairing, JudgedDimmer, JudgedLamp, JudgedPairing } from '../schemas/pairing.ts';
import {
  CHOKE_DEFAULTS,
  type Default,
  DIAC_DEFAULTS,
  DIMMER_DEFAULTS,
  DRIVE_KIND_DEFAULT,
  defaultFor,
  inductorLossDefault,
  LAMP_INPUT_DEFAULTS,
  MAINS_DEFAULTS,
  OPTIONS_DEFAULTS,
  PHASE_TABLE_DEFAULTS,
  PHASE_TABLE_INPUT_DEFAULTS,
  POWER_FACTOR_DEFAULT,
  RATED_DEFAULTS,
  RATINGS_DEFAULTS,
  RESERVOIR_DEFAULTS,
  SECOND_SECTION_DEFAULT,
  SNUBBER_DEFAULTS,
  supplyBandDefaults,
  TIMED_DEFAULTS,
} from './pairing-defaults.ts';

export interface Assumption {
  /** where the value stands in the judged pairing, in wire form; `model.…` for what no field can change */
  readonly path: string;
  readonly value: string | number | boolean | null | readonly number[];
  readonly basis: string;
}

export interface Completion {
  readonly pairing: JudgedPairing;
  readonly assumptions: readonly Assumption[];
}

export function completePairing(asked: AskedPairing): Completion {
  const assuming = fillingFor(asked.mains.voltage_V);
  const pairing: JudgedPairing = {
    mains: {
      voltage_V: asked.mains.voltage_V,
      frequency_Hz: asked.mains.frequency_Hz,
      ...assuming.fill('mains', MAINS_DEFAULTS, asked.mains),
    },
    dimmer: completeDimmer(asked.dimmer, assuming),
    lamps: asked.lamps.map(({ count, lamp }, index) => ({
      count,
      lamp: completeLamp(lamp, `lamps[${index}].lamp`, asked.mains.voltage_V, assuming),
    })),
    addedLoad: asked.addedLoad ?? null,
    options: completeOptions(asked, assuming),
  };
  return { pairing, assumptions: assuming.assumptions };
}

type Settings = { readonly [field: string]: Default<unknown> };
type Given<G extends Settings> = { readonly [F in keyof G]?: unknown };
type Filled<G extends Settings, S> = {
  [F in keyof G]: (G[F] extends Default<infer T> ? T : never) | (F extends keyof S ? Exclude<S[F], undefined> : never);
};

interface Filling {
  readonly assumptions: Assumption[];
  one<T, S>(path: string, fallback: Default<T>, given: S | undefined): T | S;
  fill<G extends Settings, S extends Given<G>>(path: string, group: G, given: S | undefined): Filled<G, S>;
}

function fillingFor(mainsVoltage_V: number): Filling {
  const assumptions: Assumption[] = [];
  const one = <T, S>(path: string, fallback: Default<T>, given: S | undefined): T | S => {
    if (given !== undefined) return given;
    const value = defaultFor(fallback, mainsVoltage_V);
    assumptions.push({ path, value: value as Assumption['value'], basis: fallback.basis });
    return value;
  };
  const fill = <G extends Settings, S extends Given<G>>(path: string, group: G, given: S | undefined): Filled<G, S> => {
    const entries = Object.entries(group).map(([field, fallback]) => [field, one(`${path}.${field}`, fallback, given?.[field])]);
    return Object.fromEntries(entries) as Filled<G, S>;
  };
  return { assumptions, one, fill };
}

function completeDimmer(asked: AskedDimmer, { one, fill }: Filling): JudgedDimmer {
  return {
    latchingCurrent_mA: shortestCurrent(asked.latchingCurrent_mA),
    holdingCurrent_mA: shortestCurrent(asked.holdingCurrent_mA),
    ...fill('dimmer', DIMMER_DEFAULTS, asked),
    choke: fill('dimmer.choke', CHOKE_DEFAULTS, asked.choke),
    snubber: asked.snubber === undefined ? fill('dimmer.snubber', SNUBBER_DEFAULTS, {}) : asked.snubber,
    ratings: fill('dimmer.ratings', RATINGS_DEFAULTS, asked.ratings),
    drive: completeDrive(asked.drive, { one, fill }),
  };
}

function completeDrive(asked: AskedDimmer['drive'], { one, fill }: Pick<Filling, 'one' | 'fill'>): JudgedDimmer['drive'] {
  const kind = one('dimmer.drive.kind', DRIVE_KIND_DEFAULT, asked?.kind);
  if (asked?.kind === 'timed') return { kind: 'timed', ...fill('dimmer.drive', TIMED_DEFAULTS, asked) };
  if (kind !== 'diac') throw new Error(`A drive of kind ${kind} is not a default that can stand without fields.`);
  const { breakover_V, ...others } = fill('dimmer.drive', DIAC_DEFAULTS, asked);
  return {
    kind,
    ...others,
    breakover_V: shortestBreakover(breakover_V),
    secondSection: one('dimmer.drive.secondSection', SECOND_SECTION_DEFAULT, asked?.secondSection),
  };
}

function completeLamp(asked: AskedLamp, path: string, mainsVoltage_V: number, { one, fill }: Filling): JudgedLamp {
  const { load } = asked;
  const isRated = load.kind === 'class' || (load.kind === 'resistive' && load.resistance_Ohm === undefined);
  const rated = fill(path, { ...RATED_DEFAULTS, ...(isRated ? ratedAt(mainsVoltage_V) : {}) }, asked);
  if (load.kind === 'class') {
    const { ratedPower_W } = rated;
    if (ratedPower_W === null) throw new Error('A lamp known by its class has a rated power: the schema asks for it.');
    return { ...rated, ratedPower_W, powerFactor: one(`${path}.powerFactor`, POWER_FACTOR_DEFAULT, asked.powerFactor), load };
  }
  const inputPath = `${path}.input`;
  if (load.kind === 'phase-table') {
    const { minimumVoltage_V } = fill(`${path}.load`, PHASE_TABLE_DEFAULTS, load);
    return { ...rated, load: { ...load, minimumVoltage_V }, input: fill(inputPath, PHASE_TABLE_INPUT_DEFAULTS, asked.input) };
  }
  const input = fill(inputPath, LAMP_INPUT_DEFAULTS[load.kind], asked.input);
  return {
    ...rated,
    load: completeLoad(load, rated, `${path}.load`, { one, fill }),
    input: {
      ...input,
      inductorLoss_kOhm: one(`${inputPath}.inductorLoss_kOhm`, inductorLossDefault(input.inductance_mH), asked.input?.inductorLoss_kOhm),
    },
  };
}

function ratedAt(mainsVoltage_V: number): { readonly ratedVoltage_V: Default<number | null> } {
  return { ratedVoltage_V: { at230: mainsVoltage_V, at120: mainsVoltage_V, basis: 'taken as rated for the mains voltage' } };
}

type CircuitLoad = Exclude<AskedLamp['load'], { kind: 'phase-table' | 'class' }>;
type JudgedCircuit = Extract<JudgedLamp, { input: { capacitance_nF: number } }>;

function completeLoad(
  load: CircuitLoad,
  rated: { readonly ratedPower_W: number | null; readonly ratedVoltage_V: number | null },
  path: string,
  { one, fill }: Pick<Filling, 'one' | 'fill'>,
): JudgedCircuit['load'] {
  switch (load.kind) {
    case 'iv-table':
      return load;
    case 'reservoir':
      return { ...load, ...fill(path, RESERVOIR_DEFAULTS, load) };
    case 'resistive': {
      // Zero only where the resistance is given and the fallback goes unused.
      const hot = (rated.ratedVoltage_V ?? 0) ** 2 / (rated.ratedPower_W ?? 1);
      const fallback = { at230: hot, at120: hot, basis: 'ratedVoltage_V squared over ratedPower_W' };
      return { kind: 'resistive', resistance_Ohm: one(`${path}.resistance_Ohm`, fallback, load.resistance_Ohm) };
    }
  }
}

function completeOptions({ options, mains }: AskedPairing, { fill }: Filling): JudgedPairing['options'] {
  const { dialPositions_pct, ...others } = fill('options', OPTIONS_DEFAULTS, options);
  const band = supplyBandDefaults({ voltage: mains.voltage_V, frequency: mains.frequency_Hz });
  return {
    dialPositions_pct: [...dialPositions_pct],
    ...others,
    supplyBand: fill('options.supplyBand', band, options?.supplyBand),
    // what is asked for beside the grade changes nothing that is taken for granted, so neither is listed
    lampCount: options?.lampCount ? { ...options.lampCount, group: options.lampCount.group ?? 0 } : null,
    remedies: options?.remedies ?? false,
  };
}

type Current = AskedDimmer['latchingCurrent_mA'];
type OneCurrent = Exclude<Current, { positive: unknown }>;

/** Both polarities alike are written once, typical and maximum alike as one number. */
function shortestCurrent(current: Current): Current {
  if (typeof current === 'object' && 'positive' in current) {
    const positive = shortestOf(current.positive);
    const negative = shortestOf(current.negative);
    return sameCurrent(positive, negative) ? positive : { positive, negative };
  }
  return shortestOf(current);
}

function shortestOf(current: OneCurrent): OneCurrent {
  return typeof current === 'object' && current.typical === current.maximum ? current.maximum : current;
}

function sameCurrent(a: OneCurrent, b: OneCurrent): boolean {
  if (typeof a === 'number' || typeof b === 'number') return a === b;
  return a.typical === b.typical && a.maximum === b.maximum;
}

type Breakover = NonNullable<Extract<AskedDimmer['drive'], { kind: 'diac' }>['breakover_V']>;

function shortestBreakover(breakover: Breakover): Breakover {
  return typeof breakover === 'object' && breakover.positive === breakover.negative ? breakover.positive : breakover;
}
