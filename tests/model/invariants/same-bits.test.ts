/** The same input gives the same bits, whatever was computed before. */
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { judgePairing } from '../../../model/judgement/judge-pairing.ts';
import { sweepDial } from '../../../model/observation/dial-sweep.ts';
import { DROP_OUT_ANGLE } from '../../../model/tolerances.ts';
import { builtPairings, PATIENCE, runsOf } from '../../support/model-arbitrary.ts';
import { emulator, everydayDimmer, mains230, pairing, reservoirLamp } from '../../support/model-pairings.ts';

const POSITIONS = [10, 55, 90];
const PLAN = { settle: 4, observe: 2, dropOutAngle: DROP_OUT_ANGLE };

test('two generated circuits give the same rows and count the same work in either order and again', { timeout: PATIENCE }, () => {
  fc.assert(
    fc.property(builtPairings, builtPairings, (a, b) => {
      const first = [sweepDial(a, POSITIONS, PLAN), sweepDial(b, POSITIONS, PLAN)];
      const again = [sweepDial(structuredClone(b), POSITIONS, PLAN), sweepDial(structuredClone(a), POSITIONS, PLAN)];
      expect(again.toReversed()).toEqual(first);
    }),
    runsOf(8),
  );
});

test('a judgement says the same twice, and does not change what it was given', () => {
  for (const lamp of [emulator(8, mains230), reservoirLamp(8, 4.7e-6, 60)]) {
    const given = pairing(mains230, everydayDimmer(), lamp, 2);
    const before = structuredClone(given);
    const options = { dialPositions: [0, 50, 100], corners: 'nominal', dropOutAngle: DROP_OUT_ANGLE } as const;
    expect(judgePairing(given, options)).toEqual(judgePairing(structuredClone(given), options));
    expect(given).toEqual(before);
  }
});
