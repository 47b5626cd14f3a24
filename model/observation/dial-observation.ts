/**
 * Lets the circuit settle at one dial position and observes it: until its pattern repeats, and then one whole pattern (both
 * polarities), or for a fixed number of half-cycles where it never does.
 */
import type { DimmerRun, SegmentListener } from '../engine/dimmer-run.ts';
import type { HalfCycle } from '../engine/half-cycle.ts';
import { Segment } from '../engine/segment.ts';
import { RepeatWatch } from '../engine/settling.ts';
import { DROP_OUT_ANGLE, OBSERVE_HALF_CYCLES, SETTLE_HALF_CYCLES } from '../tolerances.ts';
import type { Margins } from '../verdict.ts';
import { HalfCycleMeasures, type Measures } from './half-cycle-measures.ts';
import { MarginWatch } from './margins.ts';
import { OwnCurrentEnd } from './own-current-end.ts';

export interface ObservedHalfCycle {
  readonly record: HalfCycle;
  readonly measures: Measures;
  readonly earlyDropOuts: number;
  readonly margins: Margins;
}

export interface DialObservation {
  readonly outcome: 'observed' | 'undecided';
  readonly halfCycles: readonly ObservedHalfCycle[];
  /** period of the pattern in half-cycles, null where it did not repeat */
  readonly repeatsAfter: number | null;
  readonly settled: number;
  /** least breakover margin of the silent half-cycles that were not observed, null where there were none */
  readonly breakoverWhileSettling: number | null;
}

export interface ObservationPlan {
  /** half-cycles to let pass and to observe where the pattern does not repeat */
  readonly settle: number;
  readonly observe: number;
  /** degrees before the lamps' own end at which an end of conduction is a drop-out */
  readonly dropOutAngle: number;
}

export const OBSERVATION_PLAN: ObservationPlan = { settle: SETTLE_HALF_CYCLES, observe: OBSERVE_HALF_CYCLES, dropOutAngle: DROP_OUT_ANGLE };

export class DialObserver {
  readonly run: DimmerRun;
  private readonly watch: RepeatWatch;
  private readonly measures = new HalfCycleMeasures();
  private readonly ownEnd: OwnCurrentEnd;
  private readonly margins: MarginWatch;
  private readonly plan: ObservationPlan;
  /** hears of the segments of observed half-cycles besides the measures */
  private readonly alsoListening: SegmentListener | null;

  constructor(run: DimmerRun, plan: ObservationPlan = OBSERVATION_PLAN, alsoListening: SegmentListener | null = null) {
    this.run = run;
    this.watch = new RepeatWatch(run.network);
    this.ownEnd = new OwnCurrentEnd(run, plan.dropOutAngle);
    this.margins = new MarginWatch(run.dimmer, run.halfPeriod);
    this.plan = plan;
    this.alsoListening = alsoListening;
  }

  get steps(): number {
    return this.run.steps + this.ownEnd.steps;
  }

  observe(position: number): DialObservation {
    const { run, watch } = this;
    run.setDial(position);
    watch.reset();
    let settled = 0;
    let period = 0;
    let settling: number | null = null;
    let segments: Segment[] | null = [];
    const collect: SegmentListener = {
      segment(mode, coordinates, start, duration, halfCycle) {
        segments?.push(new Segment(mode, coordinates, start, duration, halfCycle));
      },
    };
    while (period === 0 && settled < this.plan.settle) {
      // while nothing fires, how near it came counts from the first half-cycle on: the start is when the timing voltage swings widest
      run.segmentListener = segments === null ? null : collect;
      const { outcome, record } = run.finishHalfCycle();
      run.segmentListener = null;
      if (outcome === 'undecided')
        return { outcome: 'undecided', halfCycles: [], repeatsAfter: null, settled, breakoverWhileSettling: null };
      const silent = record.firings.length === 0 && record.conduction === 0;
      if (silent && segments !== null) {
        const margin = this.margins.breakover(segments);
        if (margin !== null) settling = Math.min(settling ?? margin, margin);
      }
      segments = silent ? [] : null;
      settled++;
      run.state(watch.slot);
      period = watch.note(record);
    }
    const observed: ObservedHalfCycle[] = [];
    run.segmentListener = {
      segment: (mode, coordinates, start, duration, halfCycle) => {
        this.measures.segment(mode, coordinates, start, duration, halfCycle);
        this.alsoListening?.segment(mode, coordinates, start, duration, halfCycle);
      },
    };
    run.openingListener = this.ownEnd;
    run.triacListener = this.margins;
    this.margins.reset();
    try {
      while (observed.length < (period > 0 ? wholePattern(period) : this.plan.observe)) {
        this.measures.begin();
        const { outcome, record } = run.finishHalfCycle();
        if (outcome === 'undecided')
          return { outcome: 'undecided', halfCycles: [], repeatsAfter: null, settled, breakoverWhileSettling: null };
        const early = this.ownEnd.earlyEnds(record);
        const margins = this.margins.close(record, this.measures.segments, early);
        observed.push({ record, measures: this.measures.current, earlyDropOuts: early.count, margins });
        if (period > 0) continue;
        run.state(watch.slot);
        period = watch.note(record);
      }
    } finally {
      run.segmentListener = null;
      run.openingListener = null;
      run.triacListener = null;
    }
    // a pattern found while observing: its last repetition stands for all
    const kept = period > 0 ? observed.slice(-wholePattern(period)) : observed;
    return {
      outcome: 'observed',
      halfCycles: kept,
      repeatsAfter: period > 0 ? period : null,
      settled: settled + observed.length - kept.length,
      breakoverWhileSettling: settling,
    };
  }
}

/** half-cycles that show a pattern in both polarities */
const wholePattern = (period: number): number => (period % 2 === 0 ? period : 2 * period);
