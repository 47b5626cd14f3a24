/** The lengths of settling and observing, held against the reference grid: longer ones tell no other story. */
import { describe, expect, it } from 'vitest';
import { OBSERVATION_PLAN, type ObservationPlan } from '../../../model/observation/dial-observation.ts';
import { sweepDial } from '../../../model/observation/dial-sweep.ts';
import type { Pairing } from '../../../model/pairing.ts';
import { cases } from '../../ngspice/cases.ts';

/** besides the dial setting that each circuit is compared with ngspice at */
const DIALS = [10, 35, 60, 85, 100];

const rowAt = (pairing: Pairing, dial: number, plan: ObservationPlan) => {
  const [row] = sweepDial(pairing, [dial], plan).rows;
  if (row === undefined) throw new Error('a sweep of one position has one row');
  return row;
};

describe('settling and observing on the reference grid', () => {
  const rows = cases.flatMap(({ name, pairing, dial }) =>
    [...new Set([dial, ...DIALS])].map((position) => ({ name: `${name}, dial ${position}`, pairing, position })),
  );
  const wandering = rows.filter(({ pairing, position }) => rowAt(pairing, position, OBSERVATION_PLAN).repeatsAfter === null);

  it('ends early on a repeating pattern in nearly all of it, and some of it wanders', () => {
    expect(wandering.length).toBeGreaterThan(0);
    expect(wandering.length).toBeLessThan(rows.length / 10);
  });

  it.each([
    ['observed for twice as long', { ...OBSERVATION_PLAN, observe: 2 * OBSERVATION_PLAN.observe }],
    [
      'settled and observed for twice as long',
      { ...OBSERVATION_PLAN, settle: 2 * OBSERVATION_PLAN.settle, observe: 2 * OBSERVATION_PLAN.observe },
    ],
  ])('shows the same state where a wandering circuit is %s', (_, longer) => {
    for (const { name, pairing, position } of wandering) {
      const usual = rowAt(pairing, position, OBSERVATION_PLAN);
      const long = rowAt(pairing, position, longer);
      // the states besides it may gain or lose "lopsided": where firings come and go, so do the polarities' shares
      expect(long.state, name).toBe(usual.state);
    }
  });
});
