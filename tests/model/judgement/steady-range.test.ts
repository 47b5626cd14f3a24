/** Which part of the dial counts as steady, and where a lamp lights and goes out. */
import { describe, expect, test } from 'vitest';
import { byPosition, popOn, steadyFrom, steadyWhereLit } from '../../../model/judgement/steady-range.ts';
import type { DialRow } from '../../../model/verdict.ts';
import { darkRow, dialOf, dialRow, refiringRow } from '../../support/model-dial-rows.ts';

const positions = [0, 25, 50, 75, 100];
const dial = (row: (position: number) => DialRow): DialRow[] => dialOf(positions, row);

describe('the steady range', () => {
  test('begins at the lowest position from which everything up to the top is steady both ways', () => {
    expect(steadyFrom(byPosition(dial((p) => dialRow(p))))).toBe(0);
    expect(steadyFrom(byPosition(dial((p) => (p <= 25 ? refiringRow(p, 2) : dialRow(p)))))).toBe(50);
    expect(steadyFrom(byPosition(dial((p) => (p === 50 ? refiringRow(p, 2) : dialRow(p)))))).toBe(75);
  });

  test('is nothing where the top of the dial is not steady', () => {
    expect(steadyFrom(byPosition(dial((p) => (p === 100 ? refiringRow(p, 2) : dialRow(p)))))).toBeNull();
  });

  test('ends where only one of the sweeps is unsteady, or dark', () => {
    const down = dialOf(positions, (p, sweep) => (p === 50 && sweep === 'down' ? refiringRow(p, 2) : dialRow(p)));
    expect(steadyFrom(byPosition(down))).toBe(75);
    const darkUp = dialOf(positions, (p, sweep) => (p <= 50 && sweep === 'up' ? darkRow(p) : dialRow(p)));
    expect(steadyFrom(byPosition(darkUp))).toBe(75);
  });
});

describe('steady wherever lit', () => {
  test('holds for a dial that is dark below and steady above', () => {
    expect(steadyWhereLit(dial((p) => (p < 50 ? darkRow(p) : dialRow(p))))).toBe(true);
  });

  test('holds where the way down stays lit further than the way up began', () => {
    const popping = dialOf(positions, (p, sweep) => (p < (sweep === 'up' ? 75 : 25) ? darkRow(p) : dialRow(p)));
    expect(steadyWhereLit(popping)).toBe(true);
  });

  test('does not hold with one unsteady row, with a dark row above a lit one, or with nothing lit', () => {
    expect(steadyWhereLit(dialOf(positions, (p, sweep) => (p === 50 && sweep === 'down' ? refiringRow(p, 2) : dialRow(p))))).toBe(false);
    expect(steadyWhereLit(dial((p) => (p === 75 ? darkRow(p) : dialRow(p))))).toBe(false);
    expect(steadyWhereLit(dial((p) => darkRow(p)))).toBe(false);
    expect(steadyWhereLit(dial((p) => (p === 0 ? dialRow(p, { state: 'undecided' }) : dialRow(p))))).toBe(false);
  });

  test('holds for one position judged alone', () => {
    expect(steadyWhereLit([dialRow(50)])).toBe(true);
  });
});

describe('pop-on', () => {
  test('is the lowest lit position of each sweep', () => {
    const popping = dialOf(positions, (p, sweep) => (p < (sweep === 'up' ? 75 : 25) ? darkRow(p) : dialRow(p)));
    expect(popOn(popping)).toEqual({ litFrom: 75, outBelow: 25 });
  });

  test('is null for a sweep that never lights', () => {
    expect(popOn(dial((p) => darkRow(p)))).toEqual({ litFrom: null, outBelow: null });
    expect(popOn([dialRow(50)])).toEqual({ litFrom: 50, outBelow: null });
  });
});
