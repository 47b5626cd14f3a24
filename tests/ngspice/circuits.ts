/**
 * Building blocks of the comparison circuits: an everyday dimmer and everyday lamps in SI units, each to be varied by what a case
 * states. Generic values; nothing here is a product.
 */
import type { DiacDrive, Dimmer, IvPoint, Lamp, LampInput, Load, Mains, Pairing, PerPolarity, TimedDrive } from '../../model/pairing.ts';
import type { DeckTolerances } from './deck.ts';

export interface Case {
  /** a sentence that says what is on the circuit */
  readonly name: string;
  readonly dial: number;
  readonly pairing: Pairing;
  /** where the frozen run needed other tolerances than the ordinary ones */
  readonly tolerances?: Partial<DeckTolerances>;
}

export const europe: Mains = { voltage: 230, frequency: 50, sourceResistance: 0.5 };
export const america: Mains = { voltage: 120, frequency: 60, sourceResistance: 0.5 };

export const both = (value: number): PerPolarity => ({ positive: value, negative: value });

export const diac: DiacDrive = {
  kind: 'diac',
  fixedResistance: 6.8e3,
  potentiometer: 330e3,
  capacitance: 100e-9,
  breakover: both(32),
  residualVoltage: 12,
  diacResistance: 10,
  diacHoldingCurrent: 5e-3,
  gateResistance: 100,
  gateVoltage: 0.9,
  gateThreshold: 15e-3,
  secondSection: null,
};

const americanDiac: DiacDrive = { ...diac, fixedResistance: 3.3e3, potentiometer: 150e3 };

export const timed: TimedDrive = {
  kind: 'timed',
  firingAngleFull: 25,
  firingAngleLow: 140,
  gatePulse: 100e-6,
  pulses: 'single',
  pulseSpacing: 500e-6,
};

/** A dimmer that latches at `latching` and holds at `holding` mA. */
export function dimmer(latching: number, holding: number, change: Partial<Dimmer> = {}): Dimmer {
  return {
    latchingCurrent: both(latching / 1000),
    holdingCurrent: both(holding / 1000),
    typicalLatchingCurrent: null,
    typicalHoldingCurrent: null,
    turnOffTime: 15e-6,
    onVoltage: 1,
    onResistance: 0.05,
    wiring: 'two-wire',
    choke: { inductance: 0.1e-3, resistance: 0.2, lossResistance: 1000 },
    snubber: { resistance: 100, capacitance: 33e-9 },
    interferenceCapacitance: 0,
    ratings: { maximumCurrent: null, maximumPeakCurrent: null, minimumLoad: null, maximumLoad: null },
    drive: diac,
    ...change,
  };
}

/** The same with the timing network for 120 V. */
export const american = (latching: number, holding: number, change: Partial<Dimmer> = {}): Dimmer =>
  dimmer(latching, holding, { drive: americanDiac, ...change });

export const choke = (inductance: number, lossResistance = 1000 + 2e6 * inductance): Dimmer['choke'] => ({
  inductance,
  resistance: 0.2 + 500 * inductance,
  lossResistance,
});

const nothing: LampInput = {
  seriesResistance: 0,
  seriesCapacitance: 0,
  inductance: 0,
  inductorLoss: null,
  capacitance: 0,
  damper: null,
  bleeder: null,
};

export function lamp(load: Load, input: Partial<LampInput> = {}): Lamp {
  return { ratedPower: null, input: { ...nothing, ...(load.kind === 'resistive' ? {} : { seriesResistance: 22 }), ...input }, load };
}

/** Filament lamp of so many watts, with its leads. */
export const filament = (power: number, mains: Mains, input: Partial<LampInput> = {}): Lamp =>
  lamp({ kind: 'resistive', resistance: mains.voltage ** 2 / power }, { seriesResistance: 0.1, ...input });

export const table = (points: readonly (readonly [number, number])[], input: Partial<LampInput> = {}): Lamp =>
  lamp({ kind: 'iv-table', points: points.map(([voltage, current]): IvPoint => ({ voltage, current })) }, input);

/** A lamp that draws like a resistor of its power. */
export const emulator = (power: number, mains: Mains, capacitance: number, input: Partial<LampInput> = {}): Lamp => {
  const [knee, crest] = [20, Math.SQRT2 * mains.voltage];
  const current = (Math.SQRT2 * power) / mains.voltage;
  return table(
    [
      [knee, (current * knee) / crest],
      [crest, current],
    ],
    { capacitance, ...input },
  );
};

/** A linear regulator behind a string that lights above `knee` volts. */
export const linearString = (knee: number, current: number, capacitance: number, input: Partial<LampInput> = {}): Lamp =>
  table(
    [
      [knee, 0],
      [knee * 1.05, current],
      [knee * 2, current],
    ],
    { capacitance, ...input },
  );

/** Constant power above `low` volts. */
export const converter = (power: number, low: number, high: number, capacitance: number, input: Partial<LampInput> = {}): Lamp => {
  const steps = 8;
  const points = Array.from({ length: steps + 1 }, (_, n) => {
    const voltage = low * (high / low) ** (n / steps);
    return [voltage, power / voltage] as const;
  });
  return table([[0.8 * low, 0], ...points], { capacitance, ...input });
};

export const reservoir = (power: number, capacitance: number, minimumVoltage: number, input: Partial<LampInput> = {}, surge = 10): Lamp =>
  lamp({ kind: 'reservoir', capacitance, surgeResistance: surge, drain: { kind: 'power', power }, minimumVoltage }, input);

export function pairing(
  mains: Mains,
  dimmer: Dimmer,
  lamps: readonly (readonly [number, Lamp])[],
  added: Pairing['addedLoad'] = null,
): Pairing {
  return { mains, dimmer, lamps: lamps.map(([count, lamp]) => ({ count, lamp })), addedLoad: added };
}
