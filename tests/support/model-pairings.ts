/**
 * Builders of pairings in SI units for the model's tests: an everyday dimmer and everyday lamps (generic values, no product), and a
 * nearly ideal switch on a stiff supply for comparisons with closed forms. Each builder takes what a test wants different.
 */
import type { DiacDrive, Dimmer, IvPoint, Lamp, LampInput, Load, Mains, Pairing, PerPolarity, TimedDrive } from '../../model/pairing.ts';
import { LEAST_RESISTANCE } from '../../model/tolerances.ts';

export const mains230: Mains = { voltage: 230, frequency: 50, sourceResistance: 0.5 };
export const mains120: Mains = { voltage: 120, frequency: 60, sourceResistance: 0.5 };

/** a supply without wiring to speak of */
export const stiff = (voltage: number, frequency: number): Mains => ({ voltage, frequency, sourceResistance: 1e-3 });

export const both = (value: number): PerPolarity => ({ positive: value, negative: value });

export const peakOf = (mains: Mains): number => Math.SQRT2 * mains.voltage;

export function diacDrive(change: Partial<DiacDrive> = {}): DiacDrive {
  return {
    kind: 'diac',
    fixedResistance: 22e3,
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
    ...change,
  };
}

/** the timing network for 100 to 127 V */
export const diacDrive120 = (change: Partial<DiacDrive> = {}): DiacDrive =>
  diacDrive({ fixedResistance: 10e3, potentiometer: 150e3, ...change });

export function timedDrive(change: Partial<TimedDrive> = {}): TimedDrive {
  return {
    kind: 'timed',
    firingAngleFull: 20,
    firingAngleLow: 150,
    gatePulse: 100e-6,
    pulses: 'single',
    pulseSpacing: 500e-6,
    ...change,
  };
}

/** fires at one angle whatever the dial says */
export const firedAt = (angle: number, change: Partial<TimedDrive> = {}): TimedDrive =>
  timedDrive({ firingAngleFull: angle, firingAngleLow: angle, ...change });

export function everydayDimmer(change: Partial<Dimmer> = {}): Dimmer {
  return {
    latchingCurrent: both(50e-3),
    holdingCurrent: both(30e-3),
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
    drive: diacDrive(),
    ...change,
  };
}

/** Ohm in series with the load through a switch without drop: choke and triac, the least the model lets each have */
export const SWITCH_RESISTANCE = 2 * LEAST_RESISTANCE;

/** A switch that needs next to no current to latch and to hold, without drop, choke or snubber; opens at once. */
export function idealDimmer(change: Partial<Dimmer> = {}): Dimmer {
  return everydayDimmer({
    latchingCurrent: both(1e-4),
    holdingCurrent: both(1e-4),
    turnOffTime: 0,
    onVoltage: 0,
    onResistance: LEAST_RESISTANCE,
    choke: { inductance: 0, resistance: LEAST_RESISTANCE, lossResistance: null },
    snubber: null,
    drive: firedAt(90),
    ...change,
  });
}

const bareInput: LampInput = {
  seriesResistance: 1e-3,
  seriesCapacitance: 0,
  inductance: 0,
  inductorLoss: null,
  capacitance: 0,
  damper: null,
  bleeder: null,
};

/** a lamp with nothing before its load but a milliohm */
export const bareLamp = (load: Load, input: Partial<LampInput> = {}): Lamp => ({
  ratedPower: null,
  input: { ...bareInput, ...input },
  load,
});

export function resistor(resistance: number, input: Partial<LampInput> = {}): Lamp {
  return bareLamp({ kind: 'resistive', resistance }, input);
}

export const filament = (power: number, mains: Mains, input: Partial<LampInput> = {}): Lamp => ({
  ...resistor(mains.voltage ** 2 / power, { seriesResistance: 0.1, ...input }),
  ratedPower: power,
});

const everydayInput = (capacitance: number): Partial<LampInput> => ({ seriesResistance: 22, capacitance });

export function tableLamp(points: readonly (readonly [number, number])[], input: Partial<LampInput> = {}): Lamp {
  const load: Load = { kind: 'iv-table', points: points.map(([voltage, current]): IvPoint => ({ voltage, current })) };
  return bareLamp(load, { ...everydayInput(47e-9), ...input });
}

/** draws nothing: for looking at an input stage alone */
export const idleLamp = (input: Partial<LampInput> = {}): Lamp =>
  bareLamp(
    {
      kind: 'iv-table',
      points: [
        { voltage: 0, current: 0 },
        { voltage: 10e3, current: 0 },
      ],
    },
    input,
  );

/** draws like a resistor of its power above 20 V */
export function emulator(power: number, mains: Mains, input: Partial<LampInput> = {}): Lamp {
  const crest = peakOf(mains);
  const current = (Math.SQRT2 * power) / mains.voltage;
  const lamp = tableLamp(
    [
      [20, (current * 20) / crest],
      [crest, current],
    ],
    { capacitance: mains.voltage > 180 ? 47e-9 : 100e-9, ...input },
  );
  return { ...lamp, ratedPower: power };
}

/** a string behind a linear regulator: nothing below its knee, a constant current above */
export function linearString(knee: number, current: number, input: Partial<LampInput> = {}): Lamp {
  return tableLamp(
    [
      [knee, 0],
      [knee * 1.05, current],
      [knee * 2, current],
    ],
    input,
  );
}

export function reservoirLamp(
  power: number,
  capacitance: number,
  minimumVoltage: number,
  input: Partial<LampInput> = {},
  surge = 10,
): Lamp {
  const load: Load = {
    kind: 'reservoir',
    capacitance,
    surgeResistance: surge,
    drain: { kind: 'power', power },
    minimumVoltage,
  };
  return { ...bareLamp(load, { ...everydayInput(22e-9), ...input }), ratedPower: power };
}

/** one lamp (or several of a kind) on a dimmer */
export function pairing(mains: Mains, dimmer: Dimmer, lamp: Lamp, count = 1, addedLoad: Pairing['addedLoad'] = null): Pairing {
  return { mains, dimmer, lamps: [{ count, lamp }], addedLoad };
}
