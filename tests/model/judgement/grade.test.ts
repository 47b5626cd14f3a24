/** From dial rows to a grade, its conditions and its one sentence. */
import { describe, expect, test } from 'vitest';
import { gradeDial } from '../../../model/judgement/grade.ts';
import { summarize } from '../../../model/judgement/summary.ts';
import type { Pairing, Ratings } from '../../../model/pairing.ts';
import type { DialRow } from '../../../model/verdict.ts';
import { darkRow, dialOf, dialRow, refiringRow } from '../../support/model-dial-rows.ts';
import { emulator, everydayDimmer, filament, mains230, pairing } from '../../support/model-pairings.ts';

const positions = Array.from({ length: 21 }, (_, k) => 5 * k);
const everyday = pairing(mains230, everydayDimmer(), emulator(8, mains230), 4);
const dial = (row: (position: number) => DialRow): DialRow[] => dialOf(positions, row);
const rated = (ratings: Partial<Ratings>): Pairing => ({
  ...everyday,
  dimmer: everydayDimmer({
    ratings: { maximumCurrent: null, maximumPeakCurrent: null, minimumLoad: null, maximumLoad: null, ...ratings },
  }),
});

const graded = (rows: DialRow[], p: Pairing = everyday) => {
  const judged = gradeDial(p, rows);
  return { ...judged, summary: summarize(p, rows, judged), codes: judged.reasons.map((r) => r.code) };
};

describe('the grade', () => {
  test('is suitable where every lit position is steady', () => {
    const g = graded(dial((p) => dialRow(p)));
    expect(g).toMatchObject({ grade: 'suitable', conditions: [], reasons: [] });
    expect(g.summary).toBe('4 lamps run steadily on this dimmer over the whole dial.');
  });

  test('is suitable, with the dark part told, where the dial is dark below', () => {
    const g = graded(dial((p) => (p < 20 ? darkRow(p) : dialRow(p))));
    expect(g).toMatchObject({ grade: 'suitable', codes: ['dark-low-on-dial'], popOn: { litFrom: 20, outBelow: 20 } });
    expect(g.reasons[0]?.dial).toEqual([0, 15]);
    expect(g.summary).toBe('4 lamps run steadily on this dimmer wherever they are lit (from 20 % of the dial up).');
  });

  test('is conditional on a lowest dial setting where only the lower part is unsteady', () => {
    const g = graded(dial((p) => (p < 40 ? refiringRow(p, 2) : dialRow(p))));
    expect(g).toMatchObject({ grade: 'conditional', conditions: [{ kind: 'lowest-dial', position: 40 }], codes: ['re-fires'] });
    expect(g.summary).toBe('4 lamps run steadily on this dimmer from 40 % of the dial up, not below.');
  });

  test('is conditional down to a steady range of 20 % of the dial, and unsuitable below that', () => {
    const steadyAbove = (from: number) => graded(dial((p) => (p < from ? refiringRow(p, 2) : dialRow(p)))).grade;
    expect(steadyAbove(80)).toBe('conditional');
    expect(steadyAbove(85)).toBe('unsuitable');
  });

  test('is unsuitable where full dial is unsteady', () => {
    const g = graded(dial((p) => (p > 90 ? refiringRow(p, 3) : dialRow(p))));
    expect(g.grade).toBe('unsuitable');
    expect(g.summary).toBe('4 lamps do not run steadily on this dimmer: the triac drops out and fires up to 3 times in a half-cycle.');
  });

  test('is unsuitable where the lamps stay dark', () => {
    const g = graded(dial((p) => darkRow(p)));
    expect(g).toMatchObject({ grade: 'unsuitable', codes: ['never-lights'] });
    expect(g.summary).toBe('4 lamps stay dark on this dimmer at every dial position.');
  });

  test('is unsuitable where a rating is exceeded, however steady it runs', () => {
    const g = graded(
      dial((p) => dialRow(p)),
      rated({ maximumPeakCurrent: 0.4 }),
    );
    expect(g).toMatchObject({ grade: 'unsuitable', codes: ['over-peak-rating'] });
    expect(g.summary).toBe(g.reasons[0]?.detail);
  });

  test('is undetermined where full dial could not be decided', () => {
    const g = graded(dial((p) => (p === 100 ? dialRow(p, { state: 'undecided' }) : dialRow(p))));
    expect(g.grade).toBe('undetermined');
    expect(g.summary).toBe(`Whether 4 lamps run steadily on this dimmer could not be decided. ${g.reasons[0]?.detail}`);
    expect(g.reasons[0]?.detail).toMatch(/^Too much switching to follow .* rather than a wrong one\.$/);
  });

  test('that could not be decided asks for the input capacitor where a curve falls and the lamp was given none', () => {
    const points = [
      { voltage: 40, current: 0 },
      { voltage: 60, current: 0.13 },
      { voltage: 325, current: 0.025 },
    ];
    const falling = emulator(8, mains230);
    const withCapacitor = (capacitance: number, load = { kind: 'iv-table' as const, points }) =>
      pairing(mains230, everydayDimmer(), { ...falling, load, input: { ...falling.input, capacitance } }, 3);
    const undecided = dial((p) => dialRow(p, { state: 'undecided' }));
    const hint = /The lamps draw less current as their voltage rises.* give their input capacitance/;
    expect(graded(undecided, withCapacitor(0)).summary).toMatch(hint);
    expect(graded(undecided, withCapacitor(0)).reasons[0]?.detail).toMatch(hint);
    expect(graded(undecided, withCapacitor(47e-9)).summary).not.toMatch(hint);
    expect(graded(undecided, withCapacitor(0, { kind: 'iv-table', points: points.slice(0, 2) })).summary).not.toMatch(hint);
    const mixed = { ...withCapacitor(0), lamps: [{ count: 1, lamp: filament(40, mains230) }, ...withCapacitor(0).lamps] };
    expect(graded(undecided, mixed).summary).toContain('The lamps of group 2 draw less');
  });

  test('needs no decision below a steady range', () => {
    expect(graded(dial((p) => (p === 5 ? dialRow(p, { state: 'undecided' }) : dialRow(p))))).toMatchObject({
      grade: 'conditional',
      conditions: [{ position: 10 }],
    });
  });
});

describe('the one sentence', () => {
  test('speaks of one lamp as one', () => {
    const one = pairing(mains230, everydayDimmer(), emulator(8, mains230));
    expect(
      graded(
        dial((p) => dialRow(p)),
        one,
      ).summary,
    ).toBe('One lamp runs steadily on this dimmer over the whole dial.');
    expect(
      graded(
        dial((p) => darkRow(p)),
        one,
      ).summary,
    ).toBe('One lamp stays dark on this dimmer at every dial position.');
    expect(
      graded(
        dial((p) => refiringRow(p, 2)),
        one,
      ).summary,
    ).toMatch(/^One lamp does not run steadily on this dimmer: /);
  });

  test('counts lamps of several kinds together', () => {
    const mixed: Pairing = {
      ...everyday,
      lamps: [
        { count: 2, lamp: emulator(8, mains230) },
        { count: 1, lamp: filament(40, mains230) },
      ],
    };
    expect(
      graded(
        dial((p) => dialRow(p)),
        mixed,
      ).summary,
    ).toMatch(/^These 3 lamps run steadily/);
  });
});

describe('the ratings', () => {
  test.each([
    ['r.m.s. current', { maximumCurrent: 0.19 }, ['over-current-rating']],
    ['r.m.s. current at its limit', { maximumCurrent: 0.2 }, []],
    ['peak current', { maximumPeakCurrent: 0.49 }, ['over-peak-rating']],
    ['too many watts', { maximumLoad: 31 }, ['over-load-rating']],
    ['watts at the limit', { maximumLoad: 32, minimumLoad: 32 }, []],
    ['too few watts', { minimumLoad: 33 }, ['under-load-rating']],
  ] as const)('%s', (_, ratings, codes) => {
    expect(
      graded(
        dial((p) => dialRow(p)),
        rated(ratings),
      ).codes,
    ).toEqual(codes);
  });

  test('the load is not compared where a lamp states no power', () => {
    const unrated: Pairing = { ...rated({ maximumLoad: 1 }), lamps: [{ count: 1, lamp: { ...emulator(8, mains230), ratedPower: null } }] };
    expect(
      graded(
        dial((p) => dialRow(p)),
        unrated,
      ).codes,
    ).toEqual([]);
  });
});
