/** Pairings that tests ask about. The lamps and dimmers are invented: what a guest house under refit might have. */
import { EXAMPLE_PAIRING } from '../../server/schemas/pairing.ts';

/** A JSON value that a test may take apart and change as it likes. */
// biome-ignore lint/suspicious/noExplicitAny: tests break pairings on purpose, which no type would let them do
export type Loose = any;

export function examplePairing(): Loose {
  return structuredClone(EXAMPLE_PAIRING);
}

/** The shortest question there is, at one dial position: quick to simulate. */
export function briefPairing(): Loose {
  return {
    mains: { voltage_V: 230, frequency_Hz: 50 },
    dimmer: { latchingCurrent_mA: 50, holdingCurrent_mA: 30 },
    lamps: [{ count: 1, lamp: { ratedPower_W: 60, load: { kind: 'resistive' } } }],
    options: { dialPositions_pct: [60] },
  };
}

const DIAC_DRIVE = {
  kind: 'diac',
  fixedResistance_kOhm: 6.8,
  potentiometer_kOhm: 330,
  capacitance_nF: 100,
  breakover_V: { positive: 32, negative: 33 },
  residual_V: 12,
  diacResistance_Ohm: 10,
  diacHoldingCurrent_mA: 5,
  gateResistance_Ohm: 100,
  gateVoltage_V: 0.9,
  gateThreshold_mA: 15,
  secondSection: { resistance_kOhm: 10, capacitance_nF: 47 },
};

const TIMED_DRIVE = {
  kind: 'timed',
  firingAngleFull_deg: 20,
  firingAngleLow_deg: 150,
  gatePulse_us: 100,
  pulses: 'train',
  pulseSpacing_us: 500,
};

const INPUT = {
  seriesResistance_Ohm: 22,
  seriesCapacitance_nF: 4700,
  inductance_mH: 2,
  inductorLoss_kOhm: 4,
  capacitance_nF: 47,
  damper: { resistance_Ohm: 470, capacitance_nF: 100 },
};

/** A pairing in which every field is given, with one drive; between the two of them every kind of every part appears. */
export function fullPairing(drive: 'diac' | 'timed'): Loose {
  return structuredClone({
    mains: { voltage_V: 230, frequency_Hz: 50, sourceResistance_Ohm: 0.4 },
    dimmer: {
      latchingCurrent_mA: drive === 'diac' ? { typical: 40, maximum: 60 } : { positive: 60, negative: { typical: 50, maximum: 70 } },
      holdingCurrent_mA: drive === 'diac' ? 35 : { positive: { typical: 20, maximum: 30 }, negative: 35 },
      turnOffTime_us: 20,
      onVoltage_V: 1.1,
      onResistance_Ohm: 0.04,
      wiring: 'three-wire',
      interferenceCapacitance_nF: 100,
      choke: { inductance_mH: 1.5, resistance_Ohm: 0.6, lossResistance_kOhm: 3 },
      snubber: { resistance_Ohm: 47, capacitance_nF: 68 },
      ratings: { maximumCurrent_A: 1.5, maximumPeakCurrent_A: 16, minimumLoad_W: 10, maximumLoad_W: 300 },
      drive: drive === 'diac' ? DIAC_DRIVE : TIMED_DRIVE,
    },
    lamps: [
      {
        count: 2,
        lamp: {
          ratedPower_W: 8,
          ratedVoltage_V: 230,
          load: { kind: 'reservoir', capacitance_uF: 4.7, surgeResistance_Ohm: 10, power_W: 7, minimumVoltage_V: 60 },
          input: { ...INPUT, bleeder: { kind: 'resistor', resistance_kOhm: 47 } },
        },
      },
      {
        count: 1,
        lamp: {
          ratedPower_W: 5,
          ratedVoltage_V: 230,
          load: { kind: 'reservoir', capacitance_uF: 2.2, surgeResistance_Ohm: 10, current_mA: 20, minimumVoltage_V: 60 },
          input: { ...INPUT, bleeder: { kind: 'resistor-capacitor', resistance_Ohm: 1000, capacitance_nF: 220 } },
        },
      },
      {
        count: 3,
        lamp: {
          ratedPower_W: 6,
          ratedVoltage_V: 230,
          load: {
            kind: 'iv-table',
            points: [
              { voltage_V: 0, current_mA: 0 },
              { voltage_V: 200, current_mA: 1 },
              { voltage_V: 325, current_mA: 40 },
            ],
          },
          input: { ...INPUT, bleeder: { kind: 'active', current_mA: 30, below_V: 80 } },
        },
      },
      {
        count: 1,
        lamp: {
          ratedPower_W: 25,
          ratedVoltage_V: 230,
          load: { kind: 'resistive', resistance_Ohm: 2116 },
          input: { ...INPUT, bleeder: null },
        },
      },
    ],
    addedLoad:
      drive === 'diac'
        ? { kind: 'resistor', resistance_kOhm: 8.2 }
        : { kind: 'resistor-capacitor', resistance_Ohm: 470, capacitance_nF: 150 },
    options: {
      dialPositions_pct: [20, 60, 100],
      corners: 'nominal',
      dropOutAngle_deg: 25,
      supplyBand: { low_pct: 94, high_pct: 106 },
      lampCount: { from: 1, to: 2, group: 1 },
      remedies: false,
    },
  });
}
