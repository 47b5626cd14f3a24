/**
 * Asks why a triac drops out. Where its current, had the triac stayed on, would soon have been above the holding current again, the
 * drop-out was the trough of a ring; where it would not, the lamps draw too little to hold; where it never latched, too little to latch.
 */
import { OUTPUT } from '../circuit/configuration.ts';
import { layNetwork } from '../circuit/network.ts';
import { DimmerRun } from '../engine/dimmer-run.ts';
import type { HalfCycle } from '../engine/half-cycle.ts';
import { Segment } from '../engine/segment.ts';
import type { Pairing } from '../pairing.ts';
import type { DropOutCause } from '../verdict.ts';
import type { EffortTally } from './effort.ts';
import { CAUSE_HALF_CYCLES, CAUSE_SAMPLES, CAUSE_SETTLING, RING_WINDOW } from './judgement-figures.ts';

/** largest current, in the mains' direction, that would have passed the triac within the window after it opened */
function currentHadItStayedOn(ideal: DimmerRun, openedAt: number): number {
  const sign = ideal.index % 2 === 0 ? 1 : -1;
  const until = openedAt + RING_WINDOW;
  let most = 0;
  ideal.segmentListener = {
    segment(mode, coordinates, start, duration, halfCycle) {
      if (start > until) return;
      const segment = new Segment(mode, coordinates, start, duration, halfCycle);
      for (let k = 0; k <= CAUSE_SAMPLES; k++) {
        const at = (Math.min(duration, until - start) * k) / CAUSE_SAMPLES;
        most = Math.max(most, sign * segment.value(OUTPUT.triacCurrent, at));
      }
    },
  };
  ideal.finishHalfCycle();
  return most;
}

function causeOf(record: HalfCycle, ideal: DimmerRun, openedAt: number): DropOutCause | null {
  const isPositive = record.index % 2 === 0;
  const { holdingCurrent } = ideal.dimmer;
  const [end] = record.ends;
  if (end === undefined) return null;
  if (record.failedLatches >= record.ends.length) return 'latching';
  const recovers = currentHadItStayedOn(ideal, openedAt) > (isPositive ? holdingCurrent.positive : holdingCurrent.negative);
  return recovers ? 'ringing' : 'holding';
}

/** the cause found most often over a few half-cycles at this dial position, from rest; null where nothing drops out there */
export function dropOutCause(pairing: Pairing, position: number, effort: EffortTally): DropOutCause | null {
  const run = new DimmerRun(layNetwork(pairing), pairing.dimmer);
  const ideal = new DimmerRun(run.network, run.dimmer, run);
  run.setDial(position);
  const found = { latching: 0, ringing: 0, holding: 0 };
  for (let k = 0; k < CAUSE_SETTLING + CAUSE_HALF_CYCLES; k++) {
    let openedAt: number | null = null;
    run.openingListener = {
      opening(now) {
        // the first opening decides: what follows it is its consequence
        if (openedAt !== null) return;
        openedAt = now.time;
        ideal.takeOver(now);
      },
    };
    const { outcome, record } = run.finishHalfCycle();
    if (outcome === 'undecided') break;
    if (k < CAUSE_SETTLING || openedAt === null) continue;
    const cause = causeOf(record, ideal, openedAt);
    if (cause !== null) found[cause]++;
  }
  effort.add({ halfCycles: run.index, steps: run.steps + ideal.steps, events: run.events, modesBuilt: run.modesBuilt });
  const most = Math.max(found.latching, found.ringing, found.holding);
  if (most === 0) return null;
  return (['ringing', 'latching', 'holding'] as const).find((c) => found[c] === most) ?? null;
}
