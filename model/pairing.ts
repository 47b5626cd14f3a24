/**
 * What is simulated: one dimmer, one or more lamp groups, the mains and an optional added load, as readonly types in SI units
 * (V, A, s, Ohm, F, H, W; angles in degrees). Every default is filled in before a pairing gets here; nothing is optional.
 * A capacitance, inductance, on-voltage or turn-off time of 0 and a loss resistance of null mean "absent".
 */

export interface Pairing {
  readonly mains: Mains;
  readonly dimmer: Dimmer;
  readonly lamps: readonly LampGroup[];
  readonly addedLoad: AddedLoad | null;
}

export interface Mains {
  /** r.m.s. value of the sine */
  readonly voltage: number;
  readonly frequency: number;
  /** resistance of the wiring, in the live conductor */
  readonly sourceResistance: number;
}

/** A value for positive and one for negative main current (or timing voltage). */
export interface PerPolarity {
  readonly positive: number;
  readonly negative: number;
}

export interface Dimmer {
  /** stated maximum: what the nominal corner simulates */
  readonly latchingCurrent: PerPolarity;
  readonly holdingCurrent: PerPolarity;
  /** stated typical values, null where only a maximum was given */
  readonly typicalLatchingCurrent: PerPolarity | null;
  readonly typicalHoldingCurrent: PerPolarity | null;
  readonly turnOffTime: number;
  readonly onVoltage: number;
  readonly onResistance: number;
  readonly wiring: 'two-wire' | 'three-wire';
  readonly choke: Choke;
  readonly snubber: SeriesRC | null;
  /** across the dimmer's terminals, on the mains side of the choke */
  readonly interferenceCapacitance: number;
  readonly ratings: Ratings;
  readonly drive: DiacDrive | TimedDrive;
}

export interface Choke {
  readonly inductance: number;
  readonly resistance: number;
  /** parallel core-loss resistance, null when absent */
  readonly lossResistance: number | null;
}

export interface SeriesRC {
  readonly resistance: number;
  readonly capacitance: number;
}

/** null: not stated, so not checked */
export interface Ratings {
  readonly maximumCurrent: number | null;
  readonly maximumPeakCurrent: number | null;
  readonly minimumLoad: number | null;
  readonly maximumLoad: number | null;
}

export interface DiacDrive {
  readonly kind: 'diac';
  readonly fixedResistance: number;
  readonly potentiometer: number;
  readonly capacitance: number;
  readonly breakover: PerPolarity;
  /** on-drop of the diac at small current */
  readonly residualVoltage: number;
  readonly diacResistance: number;
  readonly diacHoldingCurrent: number;
  readonly gateResistance: number;
  readonly gateVoltage: number;
  readonly gateThreshold: number;
  readonly secondSection: SeriesRC | null;
}

export interface TimedDrive {
  readonly kind: 'timed';
  /** firing angle at dial 100 %, degrees from the mains' zero crossing */
  readonly firingAngleFull: number;
  /** firing angle at the lowest dial setting */
  readonly firingAngleLow: number;
  readonly gatePulse: number;
  readonly pulses: 'single' | 'train' | 'held';
  readonly pulseSpacing: number;
}

export interface LampGroup {
  readonly count: number;
  readonly lamp: Lamp;
}

export interface Lamp {
  /** null: not stated */
  readonly ratedPower: number | null;
  readonly input: LampInput;
  readonly load: Load;
}

export interface LampInput {
  readonly seriesResistance: number;
  /** in series behind the series resistor, before everything else (a capacitive dropper), 0 when absent */
  readonly seriesCapacitance: number;
  readonly inductance: number;
  readonly inductorLoss: number | null;
  readonly capacitance: number;
  readonly damper: SeriesRC | null;
  readonly bleeder: Bleeder | null;
}

export type Bleeder =
  | { readonly kind: 'resistor'; readonly resistance: number }
  | { readonly kind: 'resistor-capacitor'; readonly resistance: number; readonly capacitance: number }
  | { readonly kind: 'active'; readonly current: number; readonly below: number };

export type Load =
  | { readonly kind: 'resistive'; readonly resistance: number }
  | { readonly kind: 'iv-table'; readonly points: readonly IvPoint[] }
  | {
      readonly kind: 'reservoir';
      readonly capacitance: number;
      readonly surgeResistance: number;
      readonly drain: { readonly kind: 'power'; readonly power: number } | { readonly kind: 'current'; readonly current: number };
      readonly minimumVoltage: number;
    };

/** A point of the static curve at the bridge output; voltages rise strictly. */
export interface IvPoint {
  readonly voltage: number;
  readonly current: number;
}

export type AddedLoad =
  | { readonly kind: 'resistor'; readonly resistance: number }
  | { readonly kind: 'resistor-capacitor'; readonly resistance: number; readonly capacitance: number };
