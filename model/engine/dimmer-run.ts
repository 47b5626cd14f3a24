/**
 * Runs the circuit of one pairing half-cycle by half-cycle: the triac's and the diac's logic on top of the walks through the modes.
 *
 * The triac, besides its electrical region (open, low, on):
 *   gated    gate current above its threshold (diac drive), or inside a gate pulse (timed drive)
 *   latched  set when |i| passes the latching current; cleared when |i| has been below the holding current for the turn-off time
 *   open -> on           gate comes while open: a firing
 *   low <-> on           |i| passes the knee
 *   low, on -> open      neither gated nor latched
 * The diac: off until the timing voltage reaches its breakover, on until its current falls below its own holding current. While on it
 * is the gate current.
 *
 * Time inside a half-cycle runs from its zero crossing, so it never loses digits however long the run.
 */
import { type Configuration, MOST_GROUP_GUARDS, OUTPUT, restingConfiguration, type Sign } from '../circuit/configuration.ts';
import { triacKnee } from '../circuit/mode-system.ts';
import type { Network } from '../circuit/network.ts';
import { numbers } from '../numbers.ts';
import type { Dimmer, PerPolarity } from '../pairing.ts';
import { DIAC_STUCK_SHARE, EVENT_BUDGET, EVENT_TIME, INSTANT_BUDGET, LADDER_LEVELS, STANDSTILL, STEP_BUDGET } from '../tolerances.ts';
import { Conduction } from './conduction.ts';
import { ConfigurationMap, SWITCH, type Switching, wayByGuard, wayBySwitching } from './configuration-map.ts';
import { gateTimesOf } from './gate-times.ts';
import { emptyHalfCycle, type HalfCycle } from './half-cycle.ts';
import { type Mode, ModeShelf, OTHER_GUARDS, type Passage, watchOutput } from './mode.ts';
import { ModeWalk } from './mode-walk.ts';

/** hears of every visit to a mode: from `start` (s into the half-cycle) for `duration`, coordinates at its start */
export interface SegmentListener {
  segment(mode: Mode, coordinates: Float64Array, start: number, duration: number, halfCycle: number): void;
}

/** hears of the triac's opening, before it opens */
export interface OpeningListener {
  opening(run: DimmerRun): void;
}

/** hears of the gate and of passages below the holding current; times in s since the half-cycle's zero crossing */
export interface TriacListener {
  gate(on: boolean, time: number): void;
  below(on: boolean, time: number): void;
}

const of = (p: PerPolarity, sign: Sign): number => (sign === 1 ? p.positive : p.negative);

export class DimmerRun {
  readonly network: Network;
  readonly dimmer: Dimmer;
  readonly halfPeriod: number;
  /** number of the half-cycle that is running, or that runs next */
  index = 0;
  /** s since the half-cycle's zero crossing */
  time = 0;
  events = 0;
  segmentListener: SegmentListener | null = null;
  openingListener: OpeningListener | null = null;
  triacListener: TriacListener | null = null;
  /** with an ideal switch the triac, once fired, stays on to the end: for asking when the lamps themselves would stop */
  readonly idealSwitch: boolean;

  private readonly map: ConfigurationMap;
  private readonly shelves: Map<number, ModeShelf>;
  private readonly walk: ModeWalk;
  private readonly knee: number;
  private readonly coordinates: Float64Array;
  private shelf!: ModeShelf;
  private mode!: Mode;
  /** state in the present mode's (mirrored) coordinates */
  private readonly x: Float64Array;
  private entered = 0;
  private dial = 0;
  private record: HalfCycle = emptyHalfCycle(0);

  private gated = false;
  private latched = false;
  private below = false;
  private belowDeadline = Number.POSITIVE_INFINITY;
  private pulseLatched = false;
  private pulseGated = false;
  private diacSince = 0;
  private readonly conduction = new Conduction();

  constructor(network: Network, dimmer: Dimmer, parent?: DimmerRun) {
    this.network = network;
    this.dimmer = dimmer;
    this.idealSwitch = parent !== undefined;
    this.halfPeriod = Math.PI / network.omega;
    this.map = parent?.map ?? new ConfigurationMap(network, dimmer);
    this.shelves = parent?.shelves ?? new Map();
    this.walk = new ModeWalk(
      this.halfPeriod / 2 ** LADDER_LEVELS,
      network.states,
      network.groups.length * MOST_GROUP_GUARDS + OTHER_GUARDS,
    );
    this.knee = triacKnee(dimmer);
    this.x = numbers(network.states);
    this.coordinates = numbers(network.states + 2);
  }

  get steps(): number {
    return this.walk.steps;
  }

  get uncertifiedSteps(): number {
    return this.walk.uncertified;
  }

  get modesBuilt(): number {
    let sum = 0;
    for (const s of this.shelves.values()) sum += s.built;
    return sum;
  }

  /** dial position 0..100 %; the state carries over. The first call starts the run from rest. */
  setDial(position: number): void {
    const previous = this.shelf as ModeShelf | undefined;
    this.dial = position;
    let shelf = this.shelves.get(position);
    if (shelf === undefined) {
      const { drive } = this.dimmer;
      const resistance = drive.kind === 'diac' ? drive.fixedResistance + drive.potentiometer * (1 - position / 100) : 0;
      shelf = new ModeShelf(this.network, this.map, resistance);
      this.shelves.set(position, shelf);
    }
    this.shelf = shelf;
    this.walk.forget();
    this.mode = shelf.mode(previous === undefined ? restingConfiguration(this.network) : this.mode.configuration);
  }

  /** true state at this moment (reservoir voltages positive), scaled as in Network */
  state(into: Float64Array): void {
    for (let k = 0; k < into.length; k++) into[k] = (this.x[k] as number) * (this.mode.mapped.flips[k] as number);
  }

  /** the triac has fired and not yet opened */
  get conducting(): boolean {
    return this.conduction.record !== null;
  }

  get configuration(): Configuration {
    return this.mode.configuration;
  }

  /** takes over another run's moment; the other must be inside or between half-cycles of the same circuit */
  takeOver(other: DimmerRun): void {
    this.shelf = other.shelf;
    this.dial = other.dial;
    this.mode = other.mode;
    this.index = other.index;
    this.time = other.time;
    other.walk.leave(this.x);
    this.gated = other.gated;
    this.latched = true;
    this.below = false;
    this.belowDeadline = Number.POSITIVE_INFINITY;
    this.conduction.forget();
  }

  /** enters the present mode at the present time, the mains' phase computed afresh */
  private enterAfresh(): void {
    const angle = this.network.omega * this.time;
    const sign = this.index % 2 === 0 ? 1 : -1;
    this.entered = this.time;
    this.walk.enter(this.mode, this.x, sign * Math.cos(angle), sign * Math.sin(angle));
  }

  private tellSegment(): void {
    if (this.segmentListener !== null && this.walk.elapsed > 0) {
      this.walk.startCoordinates(this.coordinates);
      this.segmentListener.segment(this.mode, this.coordinates, this.entered, this.walk.elapsed, this.index);
    }
  }

  private change(passage: Passage): void {
    if (passage.to === this.mode) return;
    this.tellSegment();
    this.walk.pass(passage);
    this.mode = passage.to;
    this.entered = this.time;
  }

  private switchTo(switching: Switching): void {
    this.change(this.shelf.passage(this.mode, wayBySwitching(switching)));
  }

  private angle(): number {
    return (this.time / this.halfPeriod) * 180;
  }

  // --- triac -----------------------------------------------------------------------------------------------------------------

  private fire(): void {
    this.conduction.begin(this.record, this.angle());
    this.latched = false;
    this.below = false;
    this.belowDeadline = Number.POSITIVE_INFINITY;
    this.switchTo(this.walk.value(OUTPUT.triacVoltage) >= 0 ? SWITCH.triacOnPositive : SWITCH.triacOnNegative);
  }

  private open(): void {
    this.openingListener?.opening(this);
    this.conduction.end(this.record, this.angle());
    this.latched = false;
    this.below = false;
    this.belowDeadline = Number.POSITIVE_INFINITY;
    this.switchTo(SWITCH.triacOpen);
  }

  private setGate(on: boolean): void {
    if (on === this.gated) return;
    this.gated = on;
    this.triacListener?.gate(on, this.time);
    if (on) {
      this.pulseLatched = this.latched;
      this.pulseGated = true;
      if (this.mode.configuration.triac === 'open') this.fire();
      return;
    }
    if (!this.pulseLatched) this.record.failedLatches++;
    if (!this.latched && this.mode.configuration.triac !== 'open') this.open();
  }

  private latch(): void {
    this.latched = true;
    this.pulseLatched = true;
    this.below = false;
    this.belowDeadline = Number.POSITIVE_INFINITY;
  }

  private fallBelowHolding(): void {
    this.below = true;
    this.triacListener?.below(true, this.time);
    if (this.idealSwitch) return;
    this.belowDeadline = this.time + this.dimmer.turnOffTime;
    if (this.dimmer.turnOffTime === 0) this.unlatch();
  }

  private riseAboveHolding(): void {
    if (this.below) this.triacListener?.below(false, this.time);
    this.below = false;
    this.belowDeadline = Number.POSITIVE_INFINITY;
  }

  private unlatch(): void {
    this.latched = false;
    this.below = false;
    this.belowDeadline = Number.POSITIVE_INFINITY;
    if (!this.gated && this.mode.configuration.triac !== 'open') this.open();
  }

  /** the triac's current left its window */
  private triacCrossed(side: 0 | 1): void {
    const { triac, triacSign } = this.mode.configuration;
    if (triac === 'low') {
      const sign: Sign = side === 1 ? 1 : -1;
      this.switchTo(sign === 1 ? SWITCH.triacOnPositive : SWITCH.triacOnNegative);
      if (this.latched && of(this.dimmer.holdingCurrent, sign) <= this.knee) {
        this.riseAboveHolding();
      }
      return;
    }
    const falling = (side === 0) === (triacSign === 1);
    if (!falling) {
      // only an unlatched triac has the latching current, only one below holding the holding current, as its far bound
      if (this.latched) {
        this.riseAboveHolding();
      } else this.latch();
      return;
    }
    const atKnee = !this.latched || this.below || of(this.dimmer.holdingCurrent, triacSign) <= this.knee;
    if (atKnee) this.switchTo(SWITCH.triacLow);
    if (this.latched && !this.below) this.fallBelowHolding();
  }

  private watchTriac(g: number): number {
    const { triac, triacSign } = this.mode.configuration;
    if (triac === 'open') return g;
    let from: number;
    let to: number;
    if (triac === 'low') {
      from = -this.knee;
      to = this.knee;
    } else {
      const holding = of(this.dimmer.holdingCurrent, triacSign);
      from = this.latched && !this.below ? holding : this.knee;
      to = Number.POSITIVE_INFINITY;
      if (!this.latched) to = of(this.dimmer.latchingCurrent, triacSign);
      else if (this.below) to = holding;
      if (triacSign === -1) [from, to] = [-to, -from];
    }
    watchOutput(this.mode, g, OUTPUT.triacCurrent, from, to);
    return g + 1;
  }

  // --- diac ------------------------------------------------------------------------------------------------------------------

  private gateReached(): boolean {
    const { drive } = this.dimmer;
    return drive.kind === 'diac' && Math.abs(this.walk.value(OUTPUT.diacCurrent)) > drive.gateThreshold;
  }

  private diacCrossed(side: 0 | 1): void {
    const { drive } = this.dimmer;
    if (drive.kind !== 'diac') return;
    const { diac, diacSign } = this.mode.configuration;
    if (!diac) {
      this.diacSince = this.time;
      this.pulseGated = false;
      this.switchTo(side === 1 ? SWITCH.diacOnPositive : SWITCH.diacOnNegative);
      if (this.gateReached()) this.setGate(true);
      return;
    }
    const falling = (side === 0) === (diacSign === 1);
    if (!falling) {
      this.setGate(true);
      return;
    }
    const ends = !this.gated || drive.gateThreshold <= drive.diacHoldingCurrent;
    if (this.gated) this.setGate(false);
    if (ends) this.endDump();
  }

  private endDump(): void {
    if (!this.pulseGated) this.record.failedLatches++;
    if (this.time - this.diacSince > DIAC_STUCK_SHARE * this.halfPeriod) this.record.diacStuck = true;
    this.switchTo(SWITCH.diacOff);
  }

  private watchDiac(g: number): number {
    const { drive } = this.dimmer;
    const timing = this.network.timing;
    if (drive.kind !== 'diac' || timing === null) return g;
    const { diac, diacSign } = this.mode.configuration;
    if (!diac) {
      const upward = timing.orientation === 1 ? drive.breakover.positive : drive.breakover.negative;
      const downward = timing.orientation === 1 ? drive.breakover.negative : drive.breakover.positive;
      watchOutput(this.mode, g, OUTPUT.timingVoltage, -downward, upward);
      return g + 1;
    }
    const hold = drive.diacHoldingCurrent;
    let from = this.gated ? Math.max(drive.gateThreshold, hold) : hold;
    let to = this.gated ? Number.POSITIVE_INFINITY : drive.gateThreshold;
    if (!this.gated && drive.gateThreshold <= hold) to = Number.POSITIVE_INFINITY;
    if (diacSign === -1) [from, to] = [-to, -from];
    watchOutput(this.mode, g, OUTPUT.diacCurrent, from, to);
    return g + 1;
  }

  // --- guards ----------------------------------------------------------------------------------------------------------------

  /** Sets the windows of the diac and the triac, unless the mode was last left with the same ones. */
  private setGuards(): void {
    const { mode } = this;
    const logic = (this.latched ? 1 : 0) + (this.below ? 2 : 0) + (this.gated ? 4 : 0);
    if (mode.watchedUnder !== logic) {
      mode.triacGuard = this.watchDiac(mode.mapped.guards.length);
      mode.guardCount = this.watchTriac(mode.triacGuard);
      mode.watchedUnder = logic;
    }
  }

  private crossed(): void {
    this.events++;
    const g = this.walk.crossedGuard;
    const side = this.walk.crossedSide;
    if (g < this.mode.mapped.guards.length) this.change(this.shelf.passage(this.mode, wayByGuard(g, side)));
    else if (g === this.mode.triacGuard) this.triacCrossed(side);
    else this.diacCrossed(side);
  }

  /** switches at one instant until every part is in its window; false when that does not end */
  private settleInstant(): boolean {
    this.setGuards();
    for (let k = 0; k < INSTANT_BUDGET; k++) {
      if (this.walk.begin(this.mode.guardCount, this.mode.watchedUnder)) return true;
      this.crossed();
      this.setGuards();
    }
    return false;
  }

  // --- half-cycle ------------------------------------------------------------------------------------------------------------

  /** Runs on to the end of the half-cycle. "undecided": a budget ran out; the run cannot go on. */
  finishHalfCycle(): { readonly outcome: 'done' | 'undecided'; readonly record: HalfCycle } {
    const record = emptyHalfCycle(this.index);
    this.record = record;
    const gateTimes = gateTimesOf(this.dimmer.drive, this.dial, this.halfPeriod);
    let nextGate = 0;
    while (nextGate < gateTimes.length && (gateTimes[nextGate] as number) < this.time) nextGate++;
    const carried = this.conduction.record;
    const eventsBefore = this.events;
    const stepsBefore = this.walk.steps;
    let standing = 0;
    this.enterAfresh();
    for (;;) {
      if (!this.settleInstant()) return { outcome: 'undecided', record };
      if (this.events - eventsBefore > EVENT_BUDGET) return { outcome: 'undecided', record };
      const gateAt = nextGate < gateTimes.length ? (gateTimes[nextGate] as number) : Number.POSITIVE_INFINITY;
      const until = Math.min(this.halfPeriod, gateAt, this.belowDeadline);
      const before = this.time;
      const budget = STEP_BUDGET - (this.walk.steps - stepsBefore);
      const outcome = this.walk.walk(until - this.entered, budget, standing > STANDSTILL);
      this.time = this.entered + this.walk.elapsed;
      if (outcome === 'out-of-steps') return { outcome: 'undecided', record };
      if (outcome === 'crossed') {
        standing = this.time - before <= EVENT_TIME ? standing + 1 : 0;
        this.crossed();
        continue;
      }
      standing = 0;
      this.time = until;
      if (until === this.belowDeadline) this.unlatch();
      if (until === gateAt) {
        this.events++;
        this.setGate(nextGate % 2 === 0);
        nextGate++;
      }
      if (until === this.halfPeriod) break;
    }
    this.tellSegment();
    this.walk.leave(this.x);
    if (carried !== null && record.firings.length === 0) this.conduction.carryOver(carried, record);
    if (this.mode.configuration.diac && this.halfPeriod - this.diacSince > DIAC_STUCK_SHARE * this.halfPeriod) record.diacStuck = true;
    this.time = 0;
    this.index++;
    this.belowDeadline -= this.halfPeriod;
    this.diacSince -= this.halfPeriod;
    return { outcome: 'done', record };
  }
}
