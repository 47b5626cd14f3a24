/**
 * A walk that was proven in a half-cycle before is taken again where the next one begins close to it. That may save work and nothing else:
 * every part stays within its region, and a circuit settles to what it settles to when every half-cycle is walked from nothing.
 */
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { RepeatWatch } from '../../../model/engine/settling.ts';
import type { Pairing } from '../../../model/pairing.ts';
import { type Angles, angleDistance } from '../../support/model-angles.ts';
import { builtPairings, dialPositions, PATIENCE, runsOf } from '../../support/model-arbitrary.ts';
import { Audit, EXCESS_ALLOWED } from '../../support/model-audit.ts';
import { startRun } from '../../support/model-run.ts';

/** half-cycles from rest; the last of them are compared where the circuit repeats itself by then */
const HALF_CYCLES = 60;
const COMPARED = 16;
/** degrees; both find every event within 1e-11 s, 2e-7 degrees, and a lamp whose curve falls may multiply that a thousandfold on its way */
const NEAR = 1e-3;

interface Course {
  /** of the pattern at the end, 0 where there is none */
  readonly period: number;
  readonly angles: readonly Angles[];
  readonly steps: number;
}

/** null where it is undecided. Setting the dial anew, even to where it stands, makes a run forget its walks. */
function course(pairing: Pairing, dial: number, forgets: boolean): Course | null {
  const run = startRun(pairing, dial);
  const watch = new RepeatWatch(run.network);
  const angles: Angles[] = [];
  let period = 0;
  for (let k = 0; k < HALF_CYCLES; k++) {
    if (forgets) run.setDial(dial);
    const { outcome, record } = run.finishHalfCycle();
    if (outcome !== 'done') return null;
    run.state(watch.slot);
    period = watch.note(record);
    angles.push(record);
  }
  return { period, angles: angles.slice(-COMPARED), steps: run.steps };
}

test('a circuit that settles does the same whether it remembers its walks or not, and mostly in half the steps', {
  timeout: PATIENCE,
}, () => {
  const counts = { settled: 0, inHalfTheSteps: 0, not: 0, worst: 0 };
  fc.assert(
    fc.property(builtPairings, dialPositions, (pairing, dial) => {
      const remembering = course(pairing, dial, false);
      const forgetting = course(pairing, dial, true);
      // what wanders makes another course of every rounding
      if (remembering === null || forgetting === null || remembering.period === 0 || forgetting.period === 0) {
        counts.not++;
        return;
      }
      counts.settled++;
      if (remembering.steps < forgetting.steps / 2) counts.inHalfTheSteps++;
      const distance = angleDistance(remembering.angles, forgetting.angles);
      counts.worst = Math.max(counts.worst, distance);
      expect(distance).toBeLessThan(NEAR);
    }),
    runsOf(60),
  );
  console.info('remembered walks', counts);
  expect(counts.settled).toBeGreaterThan(counts.not);
  expect(counts.inHalfTheSteps).toBeGreaterThan(counts.settled / 2);
});

test('every part of a generated circuit stays within its region over many half-cycles', { timeout: PATIENCE }, () => {
  fc.assert(
    fc.property(builtPairings, dialPositions, (pairing, dial) => {
      const run = startRun(pairing, dial);
      const audit = new Audit(pairing, run, dial);
      run.segmentListener = audit;
      for (let k = 0; k < COMPARED; k++) if (run.finishHalfCycle().outcome !== 'done') break;
      expect(audit.totals.worstExcess, audit.totals.excessOf).toBeLessThan(EXCESS_ALLOWED);
      expect(audit.imbalance).toBeLessThan(1e-6);
    }),
    runsOf(15),
  );
});
