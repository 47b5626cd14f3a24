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
import type { Margins } from '../verdict.ts';

const NO_MARGINS: Margins = { latching: null, holding: null, breakover: null };

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

  /** this half-cycle's conductions that ended early, and how near the last of them was to going on; to be called once it is over */
  earlyDropOuts(record: HalfCycle): { readonly count: number; readonly margins: Margins } {
    const { ends, firings } = record;
    // whatever was followed by another firing dropped out
    const refired = Math.max(0, Math.min(ends.length, firings.length - 1));
    const last = ends[ends.length - 1];
    if (last === undefined || this.openedIn !== record.index || last > 180 - this.dropOutAngle || ends.length === refired) {
      return { count: refired, margins: NO_MARGINS };
    }
    const { end, holding } = this.runOn(last);
    if (end - last <= this.dropOutAngle) return { count: refired, margins: NO_MARGINS };
    return { count: refired + 1, margins: { ...NO_MARGINS, holding } };
  }

  /** runs on from the opening: where the lamps' own current ends, degrees, and by how much a lower holding current would have held */
  private runOn(opened: number): { readonly end: number; readonly holding: number | null } {
    const { ideal } = this;
    const { holdingCurrent } = ideal.dimmer;
    const sign = ideal.index % 2 === 0 ? 1 : -1;
    const limit = sign === 1 ? holdingCurrent.positive : holdingCurrent.negative;
    const least = OWN_CURRENT_SHARE * triacKnee(ideal.dimmer);
    const step = (OWN_CURRENT_STEP / 180) * ideal.halfPeriod;
    let end = (opened / 180) * ideal.halfPeriod;
    let most = 0;
    ideal.segmentListener = {
      segment(mode, coordinates, start, duration, halfCycle) {
        const segment = new Segment(mode, coordinates, start, duration, halfCycle);
        most = segment.largest(OUTPUT.triacCurrent, sign, most);
        const current = segment.reader(OUTPUT.triacCurrent);
        for (let at = Math.ceil(start / step) * step; at < start + duration; at += step) {
          if (sign * current(at - start) > least) end = at;
        }
      },
    };
    ideal.finishHalfCycle();
    // a later current above the holding current is a matter of the turn-off time, which this does not measure
    return { end: (end / ideal.halfPeriod) * 180, holding: most <= limit ? 1 - most / limit : null };
  }
}
