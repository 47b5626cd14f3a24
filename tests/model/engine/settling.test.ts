/** Noticing that the circuit repeats itself, on made-up sequences of states. */
import { describe, expect, test } from 'vitest';
import { layNetwork } from '../../../model/circuit/network.ts';
import { emptyHalfCycle } from '../../../model/engine/half-cycle.ts';
import { RepeatWatch } from '../../../model/engine/settling.ts';
import { LONGEST_PERIOD, REPEAT_TOLERANCE } from '../../../model/tolerances.ts';
import { everydayDimmer, mains230, pairing, reservoirLamp } from '../../support/model-pairings.ts';

const network = layNetwork(pairing(mains230, everydayDimmer(), reservoirLamp(8, 4.7e-6, 60)));
const reservoir = network.groups[0]?.reservoir?.state ?? -1;

interface Moment {
  /** V sqrt(F) or A sqrt(H) of every state but the reservoir's */
  readonly level: number;
  readonly reservoir?: number;
  readonly firings?: number;
}

/** the period noticed after each half-cycle; polarity is put in here, so equal moments are a mirrored pattern */
function notice(moments: readonly Moment[], watch = new RepeatWatch(network)): number[] {
  return moments.map(({ level, reservoir: charge = 0.5, firings = 1 }, k) => {
    watch.slot.fill(k % 2 === 0 ? level : -level);
    watch.slot[reservoir] = charge;
    return watch.note({ ...emptyHalfCycle(k), firings: Array.from({ length: firings }, () => 90) });
  });
}

const many = (pattern: readonly Moment[], times: number): Moment[] => Array.from({ length: times }, () => pattern).flat();

describe('noticing a repeating pattern', () => {
  test('a mirrored pattern is found once it has held for two half-cycles', () => {
    expect(notice(many([{ level: 1 }], 4))).toEqual([0, 0, 1, 1]);
  });

  test('a pattern of two is not taken for one of one and must hold for its period', () => {
    expect(notice(many([{ level: 1 }, { level: 2 }], 3))).toEqual([0, 0, 0, 2, 2, 2]);
  });

  test.each([3, 5, LONGEST_PERIOD])('a pattern of %d half-cycles is found as such once it has been seen twice', (period) => {
    // of odd period it comes back mirrored
    const pattern = Array.from({ length: period }, (_, k) => ({ level: k + 1 }));
    const seen = notice(many(pattern, 3));
    expect(seen.slice(0, 2 * period - 1)).toEqual(new Array(2 * period - 1).fill(0));
    expect(seen.slice(2 * period - 1)).toEqual(new Array(period + 1).fill(period));
  });

  test('a pattern longer than the longest looked for is not found', () => {
    const pattern = Array.from({ length: LONGEST_PERIOD + 1 }, (_, k) => ({ level: k + 1 }));
    expect(notice(many(pattern, 4)).every((p) => p === 0)).toBe(true);
  });

  test('a circuit whose polarities differ repeats after two half-cycles, not one', () => {
    // the same sign in both polarities: nothing is mirrored
    const watch = new RepeatWatch(network);
    const seen = Array.from({ length: 6 }, (_, k) => {
      watch.slot.fill(k % 2 === 0 ? 1 : 0.5);
      return watch.note({ ...emptyHalfCycle(k), firings: [90] });
    });
    expect(seen).toEqual([0, 0, 0, 2, 2, 2]);
  });

  test('the number of firings counts, not only the states', () => {
    expect(
      notice([
        { level: 1, firings: 1 },
        { level: 1, firings: 2 },
        { level: 1, firings: 1 },
        { level: 1, firings: 2 },
      ]),
    ).toEqual([0, 0, 0, 2]);
  });

  test('the reservoir is charged by both polarities alike and must come back unmirrored', () => {
    expect(notice(many([{ level: 1, reservoir: 0.5 }], 3)).at(-1)).toBe(1);
    expect(
      notice(
        many(
          [
            { level: 1, reservoir: 0.5 },
            { level: 1, reservoir: 0.6 },
          ],
          3,
        ),
      ).at(-1),
    ).toBe(2);
  });

  test('what drifts by more than the tolerance does not repeat; what creeps by less does', () => {
    const drifting = (share: number): Moment[] => Array.from({ length: 10 }, (_, k) => ({ level: (1 + share) ** k }));
    expect(notice(drifting(2 * REPEAT_TOLERANCE)).every((p) => p === 0)).toBe(true);
    expect(notice(drifting(0.5 * REPEAT_TOLERANCE)).at(-1)).toBe(1);
  });

  test('starts over after a reset', () => {
    const watch = new RepeatWatch(network);
    expect(notice(many([{ level: 1 }], 3), watch).at(-1)).toBe(1);
    watch.reset();
    expect(notice(many([{ level: 1 }], 3), watch)).toEqual([0, 0, 1]);
  });
});
