/** N lamps are N lamps, whether they are counted as one group or laid out one by one. */
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { layNetwork } from '../../../model/circuit/network.ts';
import type { Lamp, Pairing } from '../../../model/pairing.ts';
import { angleDistance, anglesFromRest } from '../../support/model-angles.ts';
import { builtPairings, dialPositions, PATIENCE, runsOf } from '../../support/model-arbitrary.ts';

/** the same lamp a hair different, so that it is laid out as a group of its own */
const hairDifferent = (lamp: Lamp, k: number): Lamp => ({
  ...lamp,
  input: { ...lamp.input, seriesResistance: lamp.input.seriesResistance * (1 + 1e-9 * (k + 1)) },
});

test('three lamps laid out one by one fire and let go where one group of three does', { timeout: PATIENCE }, () => {
  fc.assert(
    fc.property(builtPairings, dialPositions, (pairing, dial) => {
      const lamp = pairing.lamps[0]?.lamp as Lamp;
      const together: Pairing = { ...pairing, lamps: [{ count: 3, lamp }] };
      const apart: Pairing = { ...pairing, lamps: [0, 1, 2].map((k) => ({ count: 1, lamp: hairDifferent(lamp, k) })) };
      expect(layNetwork(apart).groups).toHaveLength(3);
      expect(angleDistance(anglesFromRest(apart, dial, 2), anglesFromRest(together, dial, 2))).toBeLessThan(0.02);
    }),
    runsOf(40),
  );
});
