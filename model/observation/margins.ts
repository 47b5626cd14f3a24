/**
 * How near one half-cycle came to another outcome, as the relative change of a parameter that would have brought it about:
 * latching current at each gate pulse, holding current (or turn-off time) during each conduction, breakover voltage where nothing
 * fired. Everything comes from what the run passed through anyway; nothing is simulated for it.
 */
import { OUTPUT } from '../circuit/configuration.ts';
import type { TriacListener } from '../engine/dimmer-run.ts';
import type { HalfCycle } from '../engine/half-cycle.ts';
import type { Segment } from '../engine/segment.ts';
import type { Dimmer } from '../pairing.ts';
import { DIP_RECOVERY, DIP_SAMPLES } from '../tolerances.ts';
import type { Margins } from '../verdict.ts';
import type { EarlyEnds } from './own-current-end.ts';

interface Span {
  readonly from: number;
  readonly to: number;
}

/** where a current was sampled lowest: between the neighbouring samples of a segment, in one direction */
interface Dip extends Span {
  readonly segment: Segment;
  readonly sign: 1 | -1;
}

const SIGNS = [1, -1] as const;

/** scratch: the segment that is being sampled */
const times: number[] = [];
const currents: number[] = [];

export class MarginWatch implements TriacListener {
  private readonly dimmer: Dimmer;
  private readonly halfPeriod: number;
  private gates: Span[] = [];
  private excursions: Span[] = [];
  private gateSince: number | null = null;
  private belowSince: number | null = null;

  constructor(dimmer: Dimmer, halfPeriod: number) {
    this.dimmer = dimmer;
    this.halfPeriod = halfPeriod;
  }

  /** forgets everything: the observation starts */
  reset(): void {
    this.gates = [];
    this.excursions = [];
    this.gateSince = null;
    this.belowSince = null;
  }

  gate(on: boolean, time: number): void {
    if (on) this.gateSince = time;
    else if (this.gateSince !== null) {
      this.gates.push({ from: this.gateSince, to: time });
      this.gateSince = null;
    }
  }

  below(on: boolean, time: number): void {
    if (on) this.belowSince = time;
    else if (this.belowSince !== null) {
      this.excursions.push({ from: this.belowSince, to: time });
      this.belowSince = null;
    }
  }

  /** the margins of the half-cycle that has just ended, from its segments; null where the question did not arise */
  close(record: HalfCycle, segments: readonly Segment[], early: EarlyEnds): Margins {
    const margins: Margins = {
      latching: this.latching(segments),
      holding: this.holding(segments, early),
      breakover: record.firings.length === 0 && record.conduction === 0 ? this.breakover(segments) : null,
    };
    this.pass();
    return margins;
  }

  /** goes on to the next half-cycle */
  pass(): void {
    this.gates = [];
    this.excursions = [];
    if (this.gateSince !== null) this.gateSince -= this.halfPeriod;
    // an excursion that ended in an opening leaves nothing to close
    this.belowSince = null;
  }

  private latching(segments: readonly Segment[]): number | null {
    const { latchingCurrent } = this.dimmer;
    let closest: number | null = null;
    for (const pulse of this.gates) {
      let reached = 0;
      for (const s of segments) {
        const from = Math.max(0, pulse.from - s.start);
        const to = Math.min(s.duration, pulse.to - s.start);
        if (to <= from) continue;
        const positive = s.largest(OUTPUT.triacCurrent, 1, 0, from, to) / latchingCurrent.positive;
        const negative = s.largest(OUTPUT.triacCurrent, -1, 0, from, to) / latchingCurrent.negative;
        reached = Math.max(reached, positive, negative);
      }
      const margin = Math.abs(reached - 1);
      if (closest === null || margin < closest) closest = margin;
    }
    return closest;
  }

  private holding(segments: readonly Segment[], early: EarlyEnds): number | null {
    const { turnOffTime } = this.dimmer;
    let closest: number | null = null;
    const offer = (margin: number): void => {
      if (margin >= 0 && (closest === null || margin < closest)) closest = margin;
    };
    for (const e of this.excursions) if (turnOffTime > 0) offer(1 - (e.to - e.from) / turnOffTime);
    for (const dip of this.dips(segments)) offer(dip - 1);
    if (early.lacking !== null) offer(1 - early.lacking);
    else if (early.earlyUntil !== null) offer(this.currentAt(segments, early.earlyUntil - turnOffTime) - 1);
    return closest;
  }

  private inGate(time: number): boolean {
    if (this.gateSince !== null && time >= this.gateSince) return true;
    for (const g of this.gates) if (time >= g.from && time < g.to) return true;
    return false;
  }

  /** triac current at a moment of the half-cycle, as a multiple of the holding current */
  private currentAt(segments: readonly Segment[], time: number): number {
    const { holdingCurrent } = this.dimmer;
    const segment = segments.find((s) => time >= s.start && time <= s.start + s.duration);
    const current = segment?.value(OUTPUT.triacCurrent, time - segment.start) ?? 0;
    return current >= 0 ? current / holdingCurrent.positive : -current / holdingCurrent.negative;
  }

  /** lowest currents from which the current recovered, as multiples of the holding current, outside gate pulses and excursions */
  private dips(segments: readonly Segment[]): number[] {
    const { holdingCurrent } = this.dimmer;
    const found: number[] = [];
    let lowest = Number.POSITIVE_INFINITY;
    let lowestAt: Dip | null = null;
    // after a passage below the holding current the current has to come down again first; after a gate pulse it may dip from the start
    let highest = Number.POSITIVE_INFINITY;
    for (const segment of segments) {
      if (segment.mode.configuration.triac === 'open') {
        lowest = Number.POSITIVE_INFINITY;
        lowestAt = null;
        highest = Number.POSITIVE_INFINITY;
        continue;
      }
      segment.sampleTimes(DIP_SAMPLES, times);
      segment.sample(OUTPUT.triacCurrent, times, currents);
      for (let k = 0; k < times.length; k++) {
        const s = times[k] as number;
        const amperes = currents[k] as number;
        const sign = amperes >= 0 ? 1 : -1;
        const limit = sign === 1 ? holdingCurrent.positive : holdingCurrent.negative;
        const ratio = Math.abs(amperes) / limit;
        const gated = this.inGate(segment.start + s);
        if (ratio < 1 || gated) {
          lowest = Number.POSITIVE_INFINITY;
          lowestAt = null;
          highest = gated ? Number.POSITIVE_INFINITY : 0;
          continue;
        }
        highest = Math.max(highest, ratio);
        if (ratio * DIP_RECOVERY < highest && ratio < lowest) {
          lowest = ratio;
          lowestAt = { segment, from: times[k - 1] ?? 0, to: times[k + 1] ?? segment.duration, sign };
        } else if (lowestAt !== null && ratio > lowest * DIP_RECOVERY) {
          found.push(refined(lowestAt, lowest * limit) / limit);
          lowest = Number.POSITIVE_INFINITY;
          lowestAt = null;
          highest = ratio;
        }
      }
    }
    return found;
  }

  /** the breakover margin of a silent half-cycle */
  breakover(segments: readonly Segment[]): number | null {
    const { drive, wiring } = this.dimmer;
    if (drive.kind !== 'diac') return null;
    const orientation = wiring === 'two-wire' ? 1 : -1;
    let reached = 0;
    for (const sign of SIGNS) {
      const limit = sign * orientation === 1 ? drive.breakover.positive : drive.breakover.negative;
      for (const s of segments) reached = Math.max(reached, s.largest(OUTPUT.timingVoltage, sign, 0) / limit);
    }
    return Math.max(0, 1 - reached);
  }
}

/** the least current around a sampled dip, A */
function refined(dip: Dip, sampled: number): number {
  const against = dip.sign === 1 ? -1 : 1;
  return -dip.segment.largest(OUTPUT.triacCurrent, against, -sampled, dip.from, dip.to);
}

/** the closest of several half-cycles, parameter by parameter */
export function closestMargins(all: readonly Margins[]): Margins {
  const least = (pick: (m: Margins) => number | null): number | null => {
    const values = all.map(pick).filter((v) => v !== null);
    return values.length === 0 ? null : Math.min(...values);
  };
  return { latching: least((m) => m.latching), holding: least((m) => m.holding), breakover: least((m) => m.breakover) };
}
