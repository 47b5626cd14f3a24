/** N lamps are N lamps, whether they are counted as one group or laid out one by one. */
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { layNetwork } from '../../../model/circuit/network.ts';
import type { Lamp, Pairing } from '../../../model/pairing.ts';
import { builtPairings, dialPositions, PATIENCE, runsOf } from '../../support/model-arbitrary.ts';
import { startRun } from '../../support/model-run.ts';

/** the same lamp a hair different, so that it is laid out as a group of its own */
const hairDifferent = (lamp: Lamp, k: number): Lamp => ({
  ...lamp,
  input: { ...lamp.input, seriesResistance: lamp.input.seriesResistance * (1 + 1e-9 * (k + 1)) },
});

const FOLLOWED = 6;

function records(pairing: Pairing, dial: number) {
  const run = startRun(pairing, dial);
  return Array.from({ length: 2 }, () => {
    const { outcome, record } = run.finishHalfCycle();
    return { outcome, record };
  });
}

test('three lamps laid out one by one fire and let go where one group of three does', { timeout: PATIENCE }, () => {
  fc.assert(
    fc.property(builtPairings, dialPositions, (pairing, dial) => {
      const lamp = pairing.lamps[0]?.lamp as Lamp;
      const together: Pairing = { ...pairing, lamps: [{ count: 3, lamp }] };
      const apart: Pairing = { ...pairing, lamps: [0, 1, 2].map((k) => ({ count: 1, lamp: hairDifferent(lamp, k) })) };
      expect(layNetwork(apart).groups).toHaveLength(3);
      const [a, b] = [records(together, dial), records(apart, dial)];
      a.forEach(({ outcome, record }, k) => {
        const other = b[k];
        if (outcome === 'undecided' || other === undefined || other.outcome === 'undecided') return;
        // where the triac fires by the dozen every firing multiplies the hair's breadth
        const many = record.firings.length > FOLLOWED;
        if (!many) expect([other.record.firings.length, other.record.ends.length]).toEqual([record.firings.length, record.ends.length]);
        for (const key of ['firings', 'ends'] as const) {
          record[key].slice(0, FOLLOWED).forEach((angle, n) => {
            expect(Math.abs((other.record[key][n] ?? 0) - angle)).toBeLessThan(0.02);
          });
        }
      });
    }),
    runsOf(40),
  );
});
