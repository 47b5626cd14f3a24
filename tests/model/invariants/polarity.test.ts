/** Turning the dimmer round: what one polarity did, the other does. */
import fc from 'fast-check';
import { expect, test } from 'vitest';
import type { Dimmer, PerPolarity } from '../../../model/pairing.ts';
import { angleDistance, anglesFromRest } from '../../support/model-angles.ts';
import { builtPairings, dialPositions, PATIENCE, runsOf } from '../../support/model-arbitrary.ts';

const turned = ({ positive, negative }: PerPolarity): PerPolarity => ({ positive: negative, negative: positive });

function turnedRound(dimmer: Dimmer): Dimmer {
  const { drive } = dimmer;
  return {
    ...dimmer,
    latchingCurrent: turned(dimmer.latchingCurrent),
    holdingCurrent: turned(dimmer.holdingCurrent),
    drive: drive.kind === 'diac' ? { ...drive, breakover: turned(drive.breakover) } : drive,
  };
}

test('a dimmer turned round, begun with the negative half-cycle, does what it did before', { timeout: PATIENCE }, () => {
  fc.assert(
    fc.property(builtPairings, dialPositions, (pairing, dial) => {
      const plain = anglesFromRest(pairing, dial, 4);
      const mirrored = anglesFromRest({ ...pairing, dimmer: turnedRound(pairing.dimmer) }, dial, 4, 1);
      expect(mirrored).toHaveLength(plain.length);
      // rounding is not mirrored, and a current that grazes its holding value makes nanoseconds of it
      expect(angleDistance(mirrored, plain)).toBeLessThan(1e-3);
    }),
    runsOf(40),
  );
});
