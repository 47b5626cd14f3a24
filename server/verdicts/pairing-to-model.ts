/**
 * Converts a judged pairing from the wire's units to the model's: SI, and one way of saying that a part is absent. Nothing is filled
 * in here and nothing is judged.
 */
import type * as model from '../../model/index.ts';
import type { JudgedDimmer, JudgedLamp, JudgedPairing } from '../schemas/pairing.ts';
import { POLARITIES, readPolarity } from '../schemas/polarity.ts';
import type { AskedCircuit, AskedGroup, AskedOptions } from '../simulation/asked-circuit.ts';
import { assumedInModel } from './assumed-values.ts';
import type { Completion } from './pairing-completion.ts';
import { defaultFor, SERIES_RESISTANCE_RANGE } from './pairing-defaults.ts';

// Dividing by a power of ten rounds once, where multiplying by 1e-3 and its like would round twice: 35 mA is 0.035 A to the last bit.
const milli = (value: number): number => value / 1e3;
const micro = (value: number): number => value / 1e6;
const nano = (value: number): number => value / 1e9;
const kilo = (value: number): number => value * 1e3;
const orNull = (value: number | null, convert: (value: number) => number): number | null => (value === null ? null : convert(value));

export interface ModelQuestion {
  readonly pairing: AskedCircuit;
  readonly options: AskedOptions;
}

export function toModel({ pairing: judged, assumptions }: Completion): ModelQuestion {
  const { mains, dimmer, lamps, addedLoad, options } = judged;
  const assumed = assumptions.map(({ path }) => path);
  return {
    pairing: {
      mains: { voltage: mains.voltage_V, frequency: mains.frequency_Hz, sourceResistance: mains.sourceResistance_Ohm },
      dimmer: dimmerToModel(dimmer),
      lamps: lamps.map(({ count, lamp }, group) => ({
        count,
        ...knownLamp(lamp, mains, assumed.includes(`lamps[${group}].lamp.input.seriesResistance_Ohm`)),
      })),
      addedLoad: addedLoad === null ? null : shuntToModel(addedLoad),
    },
    options: {
      dialPositions: options.dialPositions_pct,
      corners: options.corners,
      dropOutAngle: options.dropOutAngle_deg,
      supplyBand: { low: options.supplyBand.low_pct / 100, high: options.supplyBand.high_pct / 100, source: 'as asked' },
      assumed: assumedInModel(assumed),
      lampCount: options.lampCount,
      remedies: options.remedies,
    },
  };
}

type OneOf<T> = T extends unknown ? Omit<T, 'count'> : never;

function knownLamp(lamp: JudgedLamp, mains: JudgedPairing['mains'], isSeriesAssumed: boolean): OneOf<AskedGroup> {
  const sine = { voltage: lamp.ratedVoltage_V ?? mains.voltage_V, frequency: mains.frequency_Hz };
  if ('powerFactor' in lamp) {
    const { ratedPower_W: power, powerFactor, load } = lamp;
    return { known: 'class', of: { lampClass: load.class, power, powerFactor, ...sine } };
  }
  if (!isRecorded(lamp)) return { known: 'circuit', lamp: lampToModel(lamp) };
  const { load, input, ratedPower_W } = lamp;
  return {
    known: 'record',
    table: tableToModel(load),
    ground: { seriesResistance: input.seriesResistance_Ohm, minimumVoltage: load.minimumVoltage_V, ratedPower: ratedPower_W },
    seriesRange: isSeriesAssumed ? defaultFor(SERIES_RESISTANCE_RANGE, mains.voltage_V) : null,
  };
}

type RecordedLamp = Extract<JudgedLamp, { load: { kind: 'phase-table' } }>;
type CircuitLamp = Extract<JudgedLamp, { input: { capacitance_nF: number } }>;

// the union has no discriminant at its own level
const isRecorded = (lamp: RecordedLamp | CircuitLamp): lamp is RecordedLamp => lamp.load.kind === 'phase-table';

export function tableToModel({
  voltage_V,
  frequency_Hz,
  points,
}: Omit<RecordedLamp['load'], 'kind' | 'minimumVoltage_V'>): model.PhaseTable {
  return {
    voltage: voltage_V,
    frequency: frequency_Hz,
    points: points.map(({ phase_deg, current_mA }) => ({ phase: phase_deg, current: milli(current_mA) })),
  };
}

function dimmerToModel(dimmer: JudgedDimmer): model.Dimmer {
  const { choke, ratings } = dimmer;
  return {
    latchingCurrent: maximumOf(dimmer.latchingCurrent_mA),
    holdingCurrent: maximumOf(dimmer.holdingCurrent_mA),
    typicalLatchingCurrent: typicalOf(dimmer.latchingCurrent_mA),
    typicalHoldingCurrent: typicalOf(dimmer.holdingCurrent_mA),
    turnOffTime: micro(dimmer.turnOffTime_us),
    onVoltage: dimmer.onVoltage_V,
    onResistance: dimmer.onResistance_Ohm,
    wiring: dimmer.wiring,
    choke: {
      inductance: milli(choke.inductance_mH),
      resistance: choke.resistance_Ohm,
      lossResistance: orNull(choke.lossResistance_kOhm, kilo),
    },
    snubber: seriesToModel(dimmer.snubber),
    interferenceCapacitance: nano(dimmer.interferenceCapacitance_nF),
    ratings: {
      maximumCurrent: ratings.maximumCurrent_A,
      maximumPeakCurrent: ratings.maximumPeakCurrent_A,
      minimumLoad: ratings.minimumLoad_W,
      maximumLoad: ratings.maximumLoad_W,
    },
    drive: driveToModel(dimmer.drive),
  };
}

function driveToModel(drive: JudgedDimmer['drive']): model.Dimmer['drive'] {
  if (drive.kind === 'timed') {
    return {
      kind: 'timed',
      firingAngleFull: drive.firingAngleFull_deg,
      firingAngleLow: drive.firingAngleLow_deg,
      gatePulse: micro(drive.gatePulse_us),
      pulses: drive.pulses,
      pulseSpacing: micro(drive.pulseSpacing_us),
    };
  }
  const section = drive.secondSection;
  const hasSection = section !== null && section.capacitance_nF > 0;
  return {
    kind: 'diac',
    fixedResistance: kilo(drive.fixedResistance_kOhm),
    potentiometer: kilo(drive.potentiometer_kOhm),
    capacitance: nano(drive.capacitance_nF),
    breakover: eachPolarity((polarity) => readPolarity(drive.breakover_V, polarity)?.maximum),
    residualVoltage: drive.residual_V,
    // A second section without its capacitor leaves its resistor in series with the diac.
    diacResistance: drive.diacResistance_Ohm + (section !== null && !hasSection ? kilo(section.resistance_kOhm) : 0),
    diacHoldingCurrent: milli(drive.diacHoldingCurrent_mA),
    gateResistance: drive.gateResistance_Ohm,
    gateVoltage: drive.gateVoltage_V,
    gateThreshold: milli(drive.gateThreshold_mA),
    secondSection: hasSection ? { resistance: kilo(section.resistance_kOhm), capacitance: nano(section.capacitance_nF) } : null,
  };
}

function lampToModel({ ratedPower_W, input, load }: CircuitLamp): model.Lamp {
  return {
    ratedPower: ratedPower_W,
    input: {
      seriesResistance: input.seriesResistance_Ohm,
      seriesCapacitance: nano(input.seriesCapacitance_nF),
      inductance: milli(input.inductance_mH),
      inductorLoss: orNull(input.inductorLoss_kOhm, kilo),
      capacitance: nano(input.capacitance_nF),
      damper: seriesToModel(input.damper),
      bleeder: bleederToModel(input.bleeder),
    },
    load: loadToModel(load),
  };
}

function loadToModel(load: CircuitLamp['load']): model.Load {
  switch (load.kind) {
    case 'resistive':
      return { kind: 'resistive', resistance: load.resistance_Ohm };
    case 'iv-table':
      return {
        kind: 'iv-table',
        points: load.points.map(({ voltage_V, current_mA }) => ({ voltage: voltage_V, current: milli(current_mA) })),
      };
    case 'reservoir':
      return {
        kind: 'reservoir',
        capacitance: micro(load.capacitance_uF),
        surgeResistance: load.surgeResistance_Ohm,
        drain:
          load.power_W === undefined ? { kind: 'current', current: milli(load.current_mA ?? 0) } : { kind: 'power', power: load.power_W },
        minimumVoltage: load.minimumVoltage_V,
      };
  }
}

function bleederToModel(bleeder: CircuitLamp['input']['bleeder']): model.Bleeder | null {
  if (bleeder === null) return null;
  if (bleeder.kind !== 'active') return shuntToModel(bleeder);
  return bleeder.current_mA === 0 ? null : { kind: 'active', current: milli(bleeder.current_mA), below: bleeder.below_V };
}

/** A resistor, or an R-C, across a line: absent where its capacitor is. */
function shuntToModel(shunt: NonNullable<JudgedPairing['addedLoad']>): model.AddedLoad | null {
  if (shunt.kind === 'resistor') return { kind: 'resistor', resistance: kilo(shunt.resistance_kOhm) };
  const series = seriesToModel(shunt);
  return series === null ? null : { kind: 'resistor-capacitor', ...series };
}

function seriesToModel(part: { readonly resistance_Ohm: number; readonly capacitance_nF: number } | null): model.SeriesRC | null {
  if (part === null || part.capacitance_nF === 0) return null;
  return { resistance: part.resistance_Ohm, capacitance: nano(part.capacitance_nF) };
}

type Current = JudgedDimmer['latchingCurrent_mA'];

function maximumOf(current: Current): model.PerPolarity {
  return eachPolarity((polarity) => {
    const value = readPolarity(current, polarity)?.maximum;
    return value === undefined ? undefined : milli(value);
  });
}

/** null where neither polarity has a typical value; where one has, the other's maximum stands for its own. */
function typicalOf(current: Current): model.PerPolarity | null {
  const values = POLARITIES.map((polarity) => readPolarity(current, polarity));
  if (values.every((value) => value?.typical === undefined)) return null;
  return eachPolarity((polarity) => {
    const value = readPolarity(current, polarity);
    return value === undefined ? undefined : milli(value.typical ?? value.maximum);
  });
}

function eachPolarity(read: (polarity: 'positive' | 'negative') => number | undefined): model.PerPolarity {
  const positive = read('positive');
  const negative = read('negative');
  if (positive === undefined || negative === undefined) throw new Error('A judged pairing lacks a value for one polarity.');
  return { positive, negative };
}
