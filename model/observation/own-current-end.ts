/**
 * Asks when the lamps themselves would have stopped drawing current: from the moment the triac opened the circuit is run on with a
 * switch that stays closed, and the last angle at which current still flows in the mains' direction is the lamps' own end.
 */
import { OUTPUT } from '../circuit/configuration.ts';
import { triacKnee } from '../circuit/mode-system.ts';
import { DimmerRun, type OpeningListener } from '../engine/dimmer-run.ts';
import type { HalfCycle } from '../engine/half-cycle.ts';
import { Segment } from '../engine/segment.ts';
import { OWN_CURRENT_SHARE, OWN_CURRENT_STEP, OWN_END_DOUBT } from '../tolerances.ts';

/** early ends of one half-cycle's conductions */
export interface EarlyEnds {
  readonly count: number;
  /** s into the half-cycle: the last moment at which an opening of the last conduction would have been early (at the latest, where the
   * lamps' own end was not looked for); null where nothing conducted */
  readonly earlyUntil: number | null;
  /** current at that moment, as a multiple of the holding current, where the triac was open by then */
  readonly lacking: number | null;
}

export class OwnCurrentEnd implements OpeningListener {
  private readonly ideal: DimmerRun;
  private readonly dropOutAngle: number;
  private openedIn = -1;

  constructor(run: DimmerRun, dropOutAngle: number) {
    this.dropOutAngle = dropOutAngle;
    this.ideal = new DimmerRun(run.network, run.dimmer, run);
  }

  get steps(): number {
    return this.ideal.steps;
  }

  opening(run: DimmerRun): void {
    this.openedIn = run.index;
    this.ideal.takeOver(run);
  }

  /** this half-cycle's conductions that ended early; to be called once it is over */
  earlyEnds(record: HalfCycle): EarlyEnds {
    const { ends, firings } = record;
    // whatever was followed by another firing dropped out
    const refired = Math.max(0, Math.min(ends.length, firings.length - 1));
    const last = ends[ends.length - 1];
    if (last === undefined || this.openedIn !== record.index || last > 180 - this.dropOutAngle + OWN_END_DOUBT || ends.length === refired) {
      // an end after that angle is not early, wherever the lamps' own end lies
      const asked = last !== undefined && ends.length > refired;
      return { count: refired, earlyUntil: asked ? (1 - this.dropOutAngle / 180) * this.ideal.halfPeriod : null, lacking: null };
    }
    const { ideal } = this;
    const sign = ideal.index % 2 === 0 ? 1 : -1;
    const after = this.runOn();
    const opened = (last / 180) * ideal.halfPeriod;
    const end = lastAbove(after, sign, OWN_CURRENT_SHARE * triacKnee(ideal.dimmer), this.step()) ?? opened;
    const earlyUntil = end - (this.dropOutAngle / 180) * ideal.halfPeriod;
    if (earlyUntil <= opened) return { count: refired, earlyUntil: Math.max(0, earlyUntil), lacking: null };
    const limit = sign === 1 ? ideal.dimmer.holdingCurrent.positive : ideal.dimmer.holdingCurrent.negative;
    // the triac opens the turn-off time after its current fell below
    const then = currentFrom(after, sign, earlyUntil - ideal.dimmer.turnOffTime, this.step());
    return { count: refired + 1, earlyUntil, lacking: then / limit };
  }

  private step(): number {
    return (OWN_CURRENT_STEP / 180) * this.ideal.halfPeriod;
  }

  /** runs on from the opening with the switch closed to the end of the half-cycle */
  private runOn(): Segment[] {
    const segments: Segment[] = [];
    this.ideal.segmentListener = {
      segment(mode, coordinates, start, duration, halfCycle) {
        segments.push(new Segment(mode, coordinates, start, duration, halfCycle));
      },
    };
    this.ideal.finishHalfCycle();
    return segments;
  }
}

/** the last of the moments `step` apart at which the current in the mains' direction is above `least`, s; undefined where there is none */
function lastAbove(segments: readonly Segment[], sign: 1 | -1, least: number, step: number): number | undefined {
  for (let k = segments.length - 1; k >= 0; k--) {
    const segment = segments[k] as Segment;
    if (segment.largest(OUTPUT.triacCurrent, sign, least) <= least) continue;
    const { start, duration } = segment;
    for (let n = Math.ceil((start + duration) / step) - 1; n * step >= start; n--) {
      if (sign * segment.value(OUTPUT.triacCurrent, n * step - start) > least) return n * step;
    }
  }
  return undefined;
}

/** current in the mains' direction at the first of those moments from a time on, A; 0 after the last */
function currentFrom(segments: readonly Segment[], sign: 1 | -1, time: number, step: number): number {
  const first = segments[0];
  if (first === undefined) return 0;
  const at = Math.ceil(Math.max(time, first.start) / step) * step;
  const segment = segments.find(({ start, duration }) => at >= start && at < start + duration);
  return segment === undefined ? 0 : sign * segment.value(OUTPUT.triacCurrent, at - segment.start);
}
