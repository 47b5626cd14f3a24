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
    const currents = this.ownCurrent(sign);
    const least = OWN_CURRENT_SHARE * triacKnee(ideal.dimmer);
    const opened = (last / 180) * ideal.halfPeriod;
    const end = currents.findLast((c) => c.current > least)?.time ?? opened;
    const earlyUntil = end - (this.dropOutAngle / 180) * ideal.halfPeriod;
    if (earlyUntil <= opened) return { count: refired, earlyUntil: Math.max(0, earlyUntil), lacking: null };
    const limit = sign === 1 ? ideal.dimmer.holdingCurrent.positive : ideal.dimmer.holdingCurrent.negative;
    // the triac opens the turn-off time after its current fell below
    const then = currents.find((c) => c.time >= earlyUntil - ideal.dimmer.turnOffTime)?.current ?? 0;
    return { count: refired + 1, earlyUntil, lacking: then / limit };
  }

  /** runs on from the opening with the switch closed: the current in the mains' direction, sampled to the end of the half-cycle */
  private ownCurrent(sign: 1 | -1): { readonly time: number; readonly current: number }[] {
    const { ideal } = this;
    const step = (OWN_CURRENT_STEP / 180) * ideal.halfPeriod;
    const currents: { time: number; current: number }[] = [];
    ideal.segmentListener = {
      segment(mode, coordinates, start, duration, halfCycle) {
        const current = new Segment(mode, coordinates, start, duration, halfCycle).reader(OUTPUT.triacCurrent);
        for (let at = Math.ceil(start / step) * step; at < start + duration; at += step) {
          currents.push({ time: at, current: sign * current(at - start) });
        }
      },
    };
    ideal.finishHalfCycle();
    return currents;
  }
}
