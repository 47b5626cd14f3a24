/**
 * The engine against a referee that steps generated circuits through time by brute force and writes the triac's and the diac's logic
 * again. The referee sees every event late by up to a step; where that makes the two differ, it must come nearer with finer steps. A
 * circuit in which the finest steps still decide what happens (a current that grazes what holds it) settles nothing; those are few.
 */
import fc from 'fast-check';
import { expect, test } from 'vitest';
import type { Pairing } from '../../../model/pairing.ts';
import { CARRY_OVER_ANGLE } from '../../../model/tolerances.ts';
import { builtPairings, dialPositions, PATIENCE, runsOf } from '../../support/model-arbitrary.ts';
import { startRun } from '../../support/model-run.ts';
import { type SteppedHalfCycle, stepThrough } from '../../support/model-stepper.ts';

const HALF_CYCLES = 2;
const COARSE = 100_000;
const FINE = 1_000_000;
/** degrees: some ten coarse steps, for one event's lateness makes the next one's */
const NEAR = 0.02;
const COMPARED = 6;

/** a conduction that reaches far into a half-cycle without a firing is that one's own, fired at 0, as the engine records it */
function carriedOver(stepped: readonly SteppedHalfCycle[]): SteppedHalfCycle[] {
  const records = stepped.map(({ firings, ends }) => ({ firings: [...firings], ends: [...ends] }));
  records.forEach((record, k) => {
    const before = records[k - 1];
    if (before === undefined || record.firings.length > 0 || before.firings.length === 0) return;
    const end = before.ends.length < before.firings.length ? Number.POSITIVE_INFINITY : (before.ends.at(-1) ?? 0) - 180;
    if (end <= CARRY_OVER_ANGLE) return;
    if (end < Number.POSITIVE_INFINITY) {
      before.ends.pop();
      record.ends.push(end);
    }
    before.ends.push(180);
    record.firings.push(0);
  });
  return records;
}

/** degrees between the two at their worst, over the first firings and ends; without end where their numbers differ */
function distance(engine: readonly SteppedHalfCycle[], referee: readonly SteppedHalfCycle[]): number {
  let most = 0;
  engine.forEach((record, k) => {
    const other = referee[k] ?? { firings: [], ends: [] };
    // the last half-cycle may end while the triac conducts
    for (const key of k === HALF_CYCLES - 1 ? (['firings'] as const) : (['firings', 'ends'] as const)) {
      const many = Math.min(record[key].length, other[key].length) > COMPARED;
      if (!many && record[key].length !== other[key].length) most = Number.POSITIVE_INFINITY;
      record[key].slice(0, COMPARED).forEach((angle, n) => {
        most = Math.max(most, Math.abs(angle - (other[key][n] ?? angle)));
      });
    }
  });
  return most;
}

function compare(pairing: Pairing, dial: number): 'agrees' | 'agrees with finer steps' | 'open' {
  const run = startRun(pairing, dial);
  const engine: SteppedHalfCycle[] = [];
  for (let k = 0; k < HALF_CYCLES; k++) {
    const { outcome, record } = run.finishHalfCycle();
    if (outcome !== 'done') return 'open';
    engine.push(record);
  }
  const coarse = stepThrough(pairing, dial, HALF_CYCLES, COARSE);
  const far = coarse === null ? Number.POSITIVE_INFINITY : distance(engine, carriedOver(coarse));
  if (far < NEAR) return 'agrees';
  const fine = stepThrough(pairing, dial, HALF_CYCLES, FINE);
  const near = fine === null ? Number.POSITIVE_INFINITY : distance(engine, carriedOver(fine));
  return near < NEAR || near < far / 4 ? 'agrees with finer steps' : 'open';
}

test('generated circuits fire and let go where brute force finds it', { timeout: PATIENCE }, () => {
  const counts = { agrees: 0, 'agrees with finer steps': 0, open: 0 };
  const open: string[] = [];
  fc.assert(
    fc.property(builtPairings, dialPositions, (pairing, dial) => {
      const outcome = compare(pairing, dial);
      counts[outcome]++;
      if (outcome === 'open') open.push(JSON.stringify({ dial, pairing }));
    }),
    runsOf(25),
  );
  console.info('engine against brute force', counts);
  expect(open.length, open.join('\n')).toBeLessThanOrEqual(0.1 * (counts.agrees + counts['agrees with finer steps'] + open.length));
});
