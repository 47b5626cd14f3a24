/**
 * Lets the circuit settle at one dial position and observes it: until its pattern repeats, and then one whole pattern (both
 * polarities), or for a fixed number of half-cycles where it never does. Where every half-cycle is the mirror image of the one before,
 * the one that showed it stands for both polarities and nothing more is simulated.
 */
import type { DimmerRun, SegmentListener } from '../engine/dimmer-run.ts';
import type { HalfCycle } from '../engine/half-cycle.ts';
import { RepeatWatch } from '../engine/settling.ts';
import type { Dimmer } from '../pairing.ts';
import { DROP_OUT_ANGLE, OBSERVE_HALF_CYCLES, SETTLE_HALF_CYCLES } from '../tolerances.ts';
import type { Margins } from '../verdict.ts';
import { type Measures, measuresOf } from './half-cycle-measures.ts';
import { MarginWatch } from './margins.ts';
import { OwnCurrentEnd } from './own-current-end.ts';
import { SegmentLog } from './segment-log.ts';

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

const UNDECIDED = { outcome: 'undecided', halfCycles: [], repeatsAfter: null, breakoverWhileSettling: null } as const;

export class DialObserver {
  readonly run: DimmerRun;
  private readonly watch: RepeatWatch;
  private readonly log = new SegmentLog();
  private readonly ownEnd: OwnCurrentEnd;
  private readonly margins: MarginWatch;
  private readonly plan: ObservationPlan;
  /** hears of the segments of observed half-cycles besides the measures */
  private readonly alsoListening: SegmentListener | null;
  /** one half-cycle can stand for both polarities: the dimmer treats them alike, and nobody else wants to hear of both */
  private readonly mirrors: boolean;

  constructor(run: DimmerRun, plan: ObservationPlan = OBSERVATION_PLAN, alsoListening: SegmentListener | null = null) {
    this.run = run;
    this.watch = new RepeatWatch(run.network);
    this.ownEnd = new OwnCurrentEnd(run, plan.dropOutAngle);
    this.margins = new MarginWatch(run.dimmer, run.halfPeriod);
    this.plan = plan;
    this.alsoListening = alsoListening;
    this.mirrors = alsoListening === null && treatsPolaritiesAlike(run.dimmer);
  }

  get steps(): number {
    return this.run.steps + this.ownEnd.steps;
  }

  observe(position: number): DialObservation {
    const { run, log } = this;
    run.setDial(position);
    this.watch.reset();
    this.margins.reset();
    run.segmentListener = log;
    run.openingListener = this.ownEnd;
    run.triacListener = this.margins;
    try {
      return this.settleAndObserve();
    } finally {
      run.segmentListener = null;
      run.openingListener = null;
      run.triacListener = null;
    }
  }

  /** runs one half-cycle; the log, the margins and the lamps' own end know of it. null where it cannot be decided */
  private halfCycle(): HalfCycle | null {
    this.log.begin();
    const { outcome, record } = this.run.finishHalfCycle();
    return outcome === 'undecided' ? null : record;
  }

  /** period of the pattern that the half-cycles up to this one show, or 0 */
  private periodAfter(record: HalfCycle): number {
    this.run.state(this.watch.slot);
    return this.watch.note(record);
  }

  /** all that is asked of the half-cycle that has just ended */
  private observed(record: HalfCycle): ObservedHalfCycle {
    const segments = this.log.segments();
    const early = this.ownEnd.earlyEnds(record);
    const margins = this.margins.close(record, segments, early);
    return { record, measures: measuresOf(segments), earlyDropOuts: early.count, margins };
  }

  private settleAndObserve(): DialObservation {
    let settled = 0;
    let period = 0;
    let breakoverWhileSettling: number | null = null;
    // while nothing fires, how near it came counts from the first half-cycle on: the start is when the timing voltage swings widest
    let wasSilent = true;
    while (period === 0 && settled < this.plan.settle) {
      const record = this.halfCycle();
      if (record === null) return { ...UNDECIDED, settled };
      const silent = record.firings.length === 0 && record.conduction === 0;
      if (silent && wasSilent) {
        const margin = this.margins.breakover(this.log.segments());
        if (margin !== null) breakoverWhileSettling = Math.min(breakoverWhileSettling ?? margin, margin);
      }
      wasSilent = silent;
      settled++;
      period = this.periodAfter(record);
      // a conduction that goes on is not yet known to its end
      if (period === 1 && this.mirrors && !this.run.conducting) {
        const seen = this.observed(record);
        return { outcome: 'observed', halfCycles: [seen, mirrored(seen)], repeatsAfter: 1, settled: settled - 1, breakoverWhileSettling };
      }
      this.margins.pass();
    }
    const observed: ObservedHalfCycle[] = [];
    this.margins.reset();
    if (this.alsoListening !== null) this.run.segmentListener = both(this.log, this.alsoListening);
    while (observed.length < (period > 0 ? wholePattern(period) : this.plan.observe)) {
      const record = this.halfCycle();
      if (record === null) return { ...UNDECIDED, settled };
      observed.push(this.observed(record));
      if (period === 0) period = this.periodAfter(record);
    }
    // a pattern found while observing: its last repetition stands for all
    const kept = period > 0 ? observed.slice(-wholePattern(period)) : observed;
    return {
      outcome: 'observed',
      halfCycles: kept,
      repeatsAfter: period > 0 ? period : null,
      settled: settled + observed.length - kept.length,
      breakoverWhileSettling,
    };
  }
}

function both(first: SegmentListener, second: SegmentListener): SegmentListener {
  return {
    segment: (...visit) => {
      first.segment(...visit);
      second.segment(...visit);
    },
  };
}

/** the same half-cycle of the other polarity */
function mirrored({ record, measures, ...rest }: ObservedHalfCycle): ObservedHalfCycle {
  return { record: { ...record, index: record.index + 1 }, measures: { ...measures, charge: -measures.charge }, ...rest };
}

/** whether what is true of one half-cycle of the mains is true of the other, mirrored */
export function treatsPolaritiesAlike({ latchingCurrent, holdingCurrent, drive }: Dimmer): boolean {
  const pairs = [latchingCurrent, holdingCurrent, ...(drive.kind === 'diac' ? [drive.breakover] : [])];
  return pairs.every(({ positive, negative }) => positive === negative);
}

/** half-cycles that show a pattern in both polarities */
const wholePattern = (period: number): number => (period % 2 === 0 ? period : 2 * period);
