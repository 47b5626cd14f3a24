/** Turning the dimmer round: what one polarity did, the other does. */
import fc from 'fast-check';
import { expect, test } from 'vitest';
import type { Dimmer, Pairing, PerPolarity } from '../../../model/pairing.ts';
import { builtPairings, dialPositions, PATIENCE, runsOf } from '../../support/model-arbitrary.ts';
import { startRun } from '../../support/model-run.ts';

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

/** a run from rest whose first half-cycle is the given one: 0 positive, 1 negative */
function records(pairing: Pairing, dial: number, first: 0 | 1) {
  const run = startRun(pairing, dial);
  run.index = first;
  return Array.from({ length: 4 }, () => {
    const { outcome, record } = run.finishHalfCycle();
    return { outcome, ...record, index: 0 };
  });
}

test('a dimmer turned round, begun with the negative half-cycle, does what it did before', { timeout: PATIENCE }, () => {
  fc.assert(
    fc.property(builtPairings, dialPositions, (pairing, dial) => {
      const mirrored = records({ ...pairing, dimmer: turnedRound(pairing.dimmer) }, dial, 1);
      // rounding is not mirrored, and a current that grazes its holding value makes nanoseconds of it
      records(pairing, dial, 0).forEach((plain, k) => {
        const other = mirrored[k] ?? plain;
        expect({ ...other, firings: other.firings.length, ends: other.ends.length, conduction: 0 }).toEqual({
          ...plain,
          firings: plain.firings.length,
          ends: plain.ends.length,
          conduction: 0,
        });
        for (const key of ['firings', 'ends'] as const) {
          plain[key].forEach((angle, n) => {
            expect(Math.abs((other[key][n] ?? 0) - angle)).toBeLessThan(1e-3);
          });
        }
      });
    }),
    runsOf(40),
  );
});
