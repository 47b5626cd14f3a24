/**
 * What a judgement says, as plain readonly data that can cross a thread. SI units; angles in degrees, dial positions, shares and
 * differences in the unit their comment names. The wire form with units in field names is the server's.
 */

import type { PerPolarity } from './pairing.ts';

export type DialState = 'dark' | 'skipping' | 're-firing' | 'dropping-out' | 'lopsided' | 'wandering' | 'undecided' | 'steady';
export type Grade = 'suitable' | 'conditional' | 'unsuitable' | 'undetermined';
export type Sweep = 'up' | 'down';

/** How near another outcome was: relative change of the parameter that would have brought it about (0.03 = 3 %), null where the
 * question did not arise */
export interface Margins {
  /** latching current: peak current in a gate pulse against it */
  readonly latching: number | null;
  /** holding current, or turn-off time: lowest current before the final decline against it, longest passage below it against
   * the turn-off time, or the current at the moment from which an end of conduction is no longer early */
  readonly holding: number | null;
  /** breakover voltage: peak timing voltage in a silent half-cycle against it */
  readonly breakover: number | null;
}

export interface DialRow {
  readonly sweep: Sweep;
  /** dial position, 0..100 % */
  readonly position: number;
  /** headline state; `alsoStates` lists the others that hold, in the table's order */
  readonly state: DialState;
  readonly alsoStates: readonly DialState[];
  /** firings per half-cycle */
  readonly firings: { readonly min: number; readonly mean: number; readonly max: number };
  /** share (0..1) of observed half-cycles without a firing */
  readonly silentShare: number;
  /** whether the pattern repeats, and after how many half-cycles; null where it wanders */
  readonly repeatsAfter: number | null;
  /** half-cycles simulated before the observation, and observed */
  readonly settled: number;
  readonly observed: number;
  /** per half-cycle, on average */
  readonly failedLatches: number;
  readonly earlyDropOuts: number;
  /** mean of the first firing angle over lit half-cycles and its spread (max - min), degrees; null where dark */
  readonly firingAngle: number | null;
  readonly firingAngleSpread: number | null;
  /** mean over lit half-cycles of the angle during which the triac conducts, degrees */
  readonly conductionAngle: number | null;
  /** modulation (max - min)/(max + min) of energy between the polarities, 0..1 */
  readonly polarityDifference: number;
  /** modulation (max - min)/(max + min) of half-cycle energy within one polarity, the larger of the two, 0..1 */
  readonly variation: number;
  /** mean power into all lamps, W */
  readonly lampPower: number;
  /** of the dimmer's line current, A */
  readonly rmsCurrent: number;
  readonly peakCurrent: number;
  readonly dcCurrent: number;
  /** the diac stayed on because the timing resistor feeds it more than its holding current */
  readonly diacStuck: boolean;
  readonly margins: Margins;
  /** some margin is under NEAR_EDGE: a part a hair different would do something else */
  readonly nearEdge: boolean;
}

export type ReasonCode =
  | 're-fires'
  | 'skips-half-cycles'
  | 'drops-out'
  | 'lopsided'
  | 'wanders'
  | 'never-lights'
  | 'dark-low-on-dial'
  | 'pop-on'
  | 'failed-latch'
  | 'stuck-diac'
  | 'undecided'
  | 'over-current-rating'
  | 'over-peak-rating'
  | 'over-load-rating'
  | 'under-load-rating';

export interface Reason {
  readonly code: ReasonCode;
  /** dial range from..to in %, both included; null where it concerns no dial position */
  readonly dial: readonly [number, number] | null;
  readonly detail: string;
  /** name of the corner at which it holds; absent for the nominal corner */
  readonly corner?: CornerName;
}

export type Condition = { readonly kind: 'lowest-dial' /** dial %, */; readonly position: number; readonly detail: string };

export interface PopOn {
  /** lowest dial position lit on the way up, % ; null where it never lights */
  readonly litFrom: number | null;
  /** lowest dial position still lit on the way down, %; null where it never lights on the way down */
  readonly outBelow: number | null;
}

export type CornerName = 'nominal' | 'low-mains-cold' | 'high-mains-cold' | 'typical-currents';

/** What a corner simulates in place of the pairing's own mains voltage and triac currents. */
export interface CornerInputs {
  readonly name: CornerName;
  /** r.m.s. */
  readonly mainsVoltage: number;
  readonly latchingCurrent: PerPolarity;
  readonly holdingCurrent: PerPolarity;
}

export interface CornerResult extends CornerInputs {
  readonly grade: Grade;
  /** lowest dial position of the steady range where the grade is conditional, % */
  readonly lowestDial: number | null;
}

/** The mains may lie anywhere from low to high, as multiples of its nominal voltage. */
export interface SupplyBand {
  readonly low: number;
  readonly high: number;
  readonly source: string;
}

/** A value that was filled in rather than given. `path` is its place in the Pairing (`dimmer.drive.breakover`, `lamps[0].lamp.input.capacitance`). */
export interface AssumedValue {
  readonly path: string;
  /** the values it may really have, SI; null: the usual range of such a part */
  readonly range: { readonly low: number; readonly high: number } | null;
}

/** The one assumed value whose measurement would turn an undetermined grade into a sure one. SI. */
export interface ValueWouldSettle {
  readonly kind: 'value';
  readonly path: string;
  /** what it is, in words: "the diac's breakover voltage" */
  readonly what: string;
  readonly assumed: number;
  /** between these two the grade over all corners flips; found by bracketing */
  readonly threshold: { readonly low: number; readonly high: number };
  readonly gradeBelow: Grade;
  readonly gradeAbove: Grade;
  /** the corner that decides on the side that does not work */
  readonly corner: CornerName;
  readonly measure: string;
  /** one plain sentence */
  readonly detail: string;
  /** other assumed values that, changed alone within their range, look as if they flipped the grade too (tried at a few dial positions) */
  readonly alsoOpen: readonly string[];
}

/** Where a lamp is known only by its class and the class's circuits are judged both ways: what to ask its maker for. */
export interface CircuitWouldSettle {
  readonly kind: 'circuit';
  readonly ask: string;
  /** one plain sentence */
  readonly detail: string;
}

export type WouldSettle = ValueWouldSettle | CircuitWouldSettle;

/** How a pairing is judged with one of the circuits that its lamps may have. */
export interface VariantGrade {
  readonly name: string;
  readonly grade: Grade;
  readonly decidedBy: CornerName;
  /** % where conditional, else null */
  readonly lowestDial: number | null;
  /** the worst one, whose evidence the judgement shows */
  readonly shown: boolean;
}

/** Work done, part of every result. */
export interface Counters {
  readonly halfCycles: number;
  readonly steps: number;
  readonly events: number;
  readonly modesBuilt: number;
}

/** Work done, and work that early endings made needless: a stop is one dial position of one sweep. */
export interface Effort extends Counters {
  readonly stops: number;
  readonly sparedStops: number;
}

export interface Judgement {
  readonly grade: Grade;
  /** one plain sentence */
  readonly summary: string;
  readonly conditions: readonly Condition[];
  readonly reasons: readonly Reason[];
  readonly dial: readonly DialRow[];
  readonly popOn: PopOn;
  /** the corners that were judged, nominal first */
  readonly corners: readonly CornerResult[];
  /** corners that could not have changed the grade any more */
  readonly sparedCorners: readonly CornerName[];
  /** the corner with the worst grade; nominal where none does worse than it */
  readonly decidedBy: CornerName;
  /** null unless an assumed value leaves the grade undetermined */
  readonly wouldSettle: WouldSettle | null;
  /** the circuits that the lamps may have, where only their class is known, each judged; the rest of the judgement is that of the worst */
  readonly variants: readonly VariantGrade[];
  readonly counters: Effort;
}

export interface JudgeOptions {
  /** rising, 0..100 %, 1 to 101 positions; one position alone is judged from a fresh start on the way up only */
  readonly dialPositions: readonly number[];
  readonly corners: 'all' | 'nominal';
  /** degrees by which conduction must end before the lamps' own current would have ended it to count as a drop-out */
  readonly dropOutAngle: number;
  /** absent: the band of the supply's standard */
  readonly supplyBand?: SupplyBand;
  /** absent: every value was given */
  readonly assumed?: readonly AssumedValue[];
  /** true: without early endings, to measure what they spare; the grade is the same */
  readonly thorough?: boolean;
}

/** Instantaneous quantities over the last observed half-cycles of one dial position; columns of equal length. */
export interface Waveforms {
  readonly sweep: Sweep;
  readonly position: number;
  /** from the rising zero crossing that starts the window, s */
  readonly time: Float64Array;
  readonly mainsVoltage: Float64Array;
  readonly lampVoltage: Float64Array;
  readonly lampCurrent: Float64Array;
  readonly dimmerCurrent: Float64Array;
  /** across the timing capacitor that feeds the diac; zeros for a timed drive */
  readonly timingVoltage: Float64Array;
  readonly gateCurrent: Float64Array;
}

// --- lamp counts --------------------------------------------------------------------------------------------------------------------

export interface CountRange {
  readonly from: number;
  readonly to: number;
  /** index of the lamp group whose count is varied; the others stay */
  readonly group: number;
}

/** why a triac drops out: too little current to stay on, too little to latch, or the trough of a ring */
export type DropOutCause = 'holding' | 'latching' | 'ringing';
export type StopCause = DropOutCause | 'peak-current' | 'rating' | 'dark' | 'lopsided' | 'uneven' | 'undecided';

export interface CountGrade {
  readonly count: number;
  readonly grade: Grade;
  readonly decidedBy: CornerName;
  /** % where conditional, else null */
  readonly lowestDial: number | null;
  /** null where workable */
  readonly cause: StopCause | null;
  readonly detail: string;
}

export interface LampCounts {
  readonly counts: readonly CountGrade[];
  /** smallest and largest count that is suitable or conditional; null where none is */
  readonly smallest: number | null;
  readonly largest: number | null;
  /** every count between the two is workable */
  readonly unbroken: boolean;
  /** why the next smaller and the next larger count are not workable; null where the range ends there */
  readonly below: StopCause | null;
  readonly above: StopCause | null;
  readonly summary: string;
  readonly counters: Effort;
}

// --- remedies -----------------------------------------------------------------------------------------------------------------------

interface RemedyOutcome {
  /** over every corner, with the remedy in place: better than without it */
  readonly grade: Grade;
  /** lowest dial setting that is still needed where the grade is conditional, % */
  readonly lowestDial: number | null;
  /** W that it adds at most: heat, or further lamps */
  readonly power: number;
  /** parts to buy and fit */
  readonly parts: number;
  /** the assumed value that would undo it within its usual range, so that the pairing with it is undetermined; null where none does */
  readonly hingesOn: ValueWouldSettle | null;
  /** one or two plain sentences: what to do and what it costs */
  readonly detail: string;
}

export type Remedy =
  | (RemedyOutcome & {
      readonly kind: 'low-end-trim';
      /** lowest dial setting, % */
      readonly position: number;
    })
  | (RemedyOutcome & {
      readonly kind: 'added-resistor';
      readonly resistance: number;
      /** dial position at which it turns `power` to heat, % */
      readonly hottestAt: number;
      /** W, the rating to buy */
      readonly ratedPower: number;
    })
  | (RemedyOutcome & {
      readonly kind: 'bypass';
      readonly resistance: number;
      readonly capacitance: number;
      readonly hottestAt: number;
      readonly ratedPower: number;
      /** V r.m.s., class of the capacitor to buy; null where none of the usual classes is enough */
      readonly capacitorClass: number | null;
      /** V, the largest that rings across the lamps */
      readonly peakVoltage: number;
    })
  | (RemedyOutcome & {
      readonly kind: 'more-lamps';
      /** lamp group, and how many more of its lamps */
      readonly group: number;
      readonly added: number;
    });

export interface Remedies {
  /** grade without any remedy, over the corners */
  readonly grade: Grade;
  /** cheapest first: by watts, then by parts */
  readonly remedies: readonly Remedy[];
  /** every candidate that was simulated, found wanting or not */
  readonly tried: readonly { readonly kind: Remedy['kind']; readonly candidates: number }[];
  /** one plain sentence, also where nothing was found */
  readonly summary: string;
  readonly counters: Effort;
}

// --- requirement --------------------------------------------------------------------------------------------------------------------

/** The largest currents of one ratio IH/IL with which the pairing is suitable: data-sheet maxima at 25 degrees C, alike in both polarities. */
export interface RequirementPoint {
  readonly latchingCurrent: number;
  readonly holdingCurrent: number;
  /** multiple of both currents at which it was seen not to be suitable any more; null where it is up to the largest currents looked at */
  readonly failsAt: number | null;
  /** corner that fails there, and why */
  readonly decidedBy: CornerName | null;
  readonly cause: StopCause | null;
  /** half of both currents does as well; false: smaller currents fail, so that the boundary is not a plain limit */
  readonly smallerDoes: boolean;
}

export interface Requirement {
  /** by falling IH/IL; empty where no currents do */
  readonly points: readonly RequirementPoint[];
  /** what the points mean, or why there are none */
  readonly summary: string;
  readonly counters: Effort;
}
