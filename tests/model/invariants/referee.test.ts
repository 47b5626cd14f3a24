/**
 * The engine against a referee that steps generated circuits through time by brute force and writes the triac's and the diac's logic
 * again. The referee sees every event late by up to a step; where that makes the two differ, it must come nearer with finer steps. A
 * circuit in which the finest steps still decide what happens (a current that grazes what holds it) settles nothing; those are few.
 */
import fc from 'fast-check';
import { expect, test } from 'vitest';
import type { Pairing } from '../../../model/pairing.ts';
import { CARRY_OVER_ANGLE } from '../../../model/tolerances.ts';
import { angleDistance, anglesFromRest } from '../../support/model-angles.ts';
import { builtPairings, dialPositions, PATIENCE, runsOf } from '../../support/model-arbitrary.ts';
import { type SteppedHalfCycle, stepThrough } from '../../support/model-stepper.ts';

const HALF_CYCLES = 2;
const COARSE = 100_000;
const FINE = 1_000_000;
/** degrees: some ten coarse steps, for one event's lateness makes the next one's */
const NEAR = 0.02;

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

function compare(pairing: Pairing, dial: number): 'agrees' | 'agrees with finer steps' | 'open' {
  const engine = anglesFromRest(pairing, dial, HALF_CYCLES);
  if (engine.length < HALF_CYCLES) return 'open';
  const coarse = stepThrough(pairing, dial, HALF_CYCLES, COARSE);
  const far = coarse === null ? Number.POSITIVE_INFINITY : angleDistance(engine, carriedOver(coarse));
  if (far < NEAR) return 'agrees';
  const fine = stepThrough(pairing, dial, HALF_CYCLES, FINE);
  const near = fine === null ? Number.POSITIVE_INFINITY : angleDistance(engine, carriedOver(fine));
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
