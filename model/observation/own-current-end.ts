/**
 * Asks when the lamps themselves would have stopped drawing current: from the moment the triac opened the circuit is run on with a
 * switch that stays closed, and the last angle at which current still flows in the mains' direction is the lamps' own end.
 */
import { OUTPUT } from '../circuit/configuration.ts';
import { triacKnee } from '../circuit/mode-system.ts';
import { DimmerRun, type OpeningListener } from '../engine/dimmer-run.ts';
import type { HalfCycle } from '../engine/half-cycle.ts';
import { Segment } from '../engine/segment.ts';
import { OWN_CURRENT_SHARE, OWN_CURRENT_STEP } from '../tolerances.ts';

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

  /** number of this half-cycle's conductions that ended early; to be called once the half-cycle is over */
  earlyDropOuts(record: HalfCycle): number {
    const { ends, firings } = record;
    // whatever was followed by another firing dropped out
    const refired = Math.max(0, Math.min(ends.length, firings.length - 1));
    const last = ends[ends.length - 1];
    if (last === undefined || this.openedIn !== record.index || last > 180 - this.dropOutAngle || ends.length === refired) return refired;
    return this.ownEnd(last) - last > this.dropOutAngle ? refired + 1 : refired;
  }

  private ownEnd(opened: number): number {
    const { ideal } = this;
    const sign = ideal.index % 2 === 0 ? 1 : -1;
    const least = OWN_CURRENT_SHARE * triacKnee(ideal.dimmer);
    const step = (OWN_CURRENT_STEP / 180) * ideal.halfPeriod;
    let end = (opened / 180) * ideal.halfPeriod;
    ideal.segmentListener = {
      segment(mode, coordinates, start, duration, halfCycle) {
        const segment = new Segment(mode, coordinates, start, duration, halfCycle);
        for (let at = Math.ceil(start / step) * step; at < start + duration; at += step) {
          if (sign * segment.value(OUTPUT.triacCurrent, at - start) > least) end = at;
        }
      },
    };
    ideal.finishHalfCycle();
    return (end / ideal.halfPeriod) * 180;
  }
}
