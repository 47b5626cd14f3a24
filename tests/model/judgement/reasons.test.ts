/** What is said about dial rows, over which part of the dial. */
import { describe, expect, test } from 'vitest';
import { dialReasons, times } from '../../../model/judgement/reasons.ts';
import { popOn } from '../../../model/judgement/steady-range.ts';
import type { DialRow } from '../../../model/verdict.ts';
import { darkRow, dialOf, dialRow, refiringRow } from '../../support/model-dial-rows.ts';

const positions = [0, 20, 40, 60, 80, 100];
const reasons = (row: (position: number, sweep: 'up' | 'down') => DialRow) => {
  const dial = dialOf(positions, row);
  return dialReasons(dial, popOn(dial));
};

describe('the reasons', () => {
  test('say nothing about a dial that is steady throughout', () => {
    expect(reasons((p) => dialRow(p))).toEqual([]);
  });

  test.each([
    ['skipping', { state: 'skipping', silentShare: 0.25 }, 'skips-half-cycles', /25 % stay silent/],
    ['re-firing', { state: 're-firing', firings: { min: 2, mean: 2.5, max: 3 } }, 're-fires', /up to 3 times in a half-cycle/],
    ['dropping out', { state: 'dropping-out', earlyDropOuts: 1, conductionAngle: 41.6 }, 'drops-out', /after 42 degrees/],
    ['lopsided', { state: 'lopsided', polarityDifference: 0.034 }, 'lopsided', /3\.4 %/],
    ['wandering', { state: 'wandering', variation: 0.021, repeatsAfter: null }, 'wanders', /2\.1 %/],
    ['undecided', { state: 'undecided' }, 'undecided', /no answer is given/],
  ] as const)('tell of %s over the positions at which it happens', (_, change, code, detail) => {
    const found = reasons((p) => (p === 40 || p === 60 ? dialRow(p, change) : dialRow(p)));
    expect(found).toHaveLength(1);
    expect(found[0]).toMatchObject({ code, dial: [40, 60] });
    expect(found[0]?.detail).toMatch(detail);
  });

  test('tell of what also holds besides the headline state', () => {
    const found = reasons((p) =>
      p === 20
        ? dialRow(p, { state: 'skipping', alsoStates: ['re-firing'], silentShare: 0.5, firings: { min: 0, mean: 1, max: 2 } })
        : dialRow(p),
    );
    expect(found.map((r) => r.code)).toEqual(['skips-half-cycles', 're-fires']);
  });

  test('give every unbroken part of the dial its own reason, whichever sweep shows it', () => {
    const found = reasons((p, sweep) => (p === 0 || (p === 60 && sweep === 'down') || p === 80 ? refiringRow(p, 2) : dialRow(p)));
    expect(found.map((r) => r.dial)).toEqual([
      [0, 0],
      [60, 80],
    ]);
  });

  test('give the range of firings and speak of flicker where the pattern changes', () => {
    const steadyPattern = reasons((p) => (p >= 80 ? refiringRow(p, p === 80 ? 2 : 5) : dialRow(p)));
    expect(steadyPattern[0]?.detail).toBe('The triac drops out and fires again, 2 to 5 times in a half-cycle: hum and heat.');
    const wandering = reasons((p) => (p === 80 ? refiringRow(p, 2, { repeatsAfter: null }) : dialRow(p)));
    expect(wandering[0]?.detail).toMatch(/flicker because the pattern changes/);
  });

  test('tell of failed latches and of a stuck diac besides the states', () => {
    const found = reasons((p) => (p === 100 ? dialRow(p, { failedLatches: 0.5, diacStuck: true }) : dialRow(p)));
    expect(found.map((r) => [r.code, r.dial])).toEqual([
      ['failed-latch', [100, 100]],
      ['stuck-diac', [100, 100]],
    ]);
  });

  test('tell of a dial that is dark throughout as never lighting', () => {
    expect(reasons((p) => darkRow(p))).toMatchObject([{ code: 'never-lights', dial: [0, 100] }]);
  });

  test('tell the dark lower end and pop-on apart', () => {
    const found = reasons((p, sweep) => (p < (sweep === 'up' ? 60 : 40) ? darkRow(p) : dialRow(p)));
    expect(found).toMatchObject([
      { code: 'dark-low-on-dial', dial: [0, 20] },
      { code: 'pop-on', dial: [40, 60] },
    ]);
  });

  test('tell of pop-on alone where the way down stays lit to the end', () => {
    const found = reasons((p, sweep) => (sweep === 'up' && p < 40 ? darkRow(p) : dialRow(p)));
    expect(found).toMatchObject([{ code: 'pop-on', dial: [0, 40] }]);
  });
});

test('times are told as once, as a number, or as a range', () => {
  expect([times(1, 1), times(2, 2), times(2, 5), times(1.5, 2.5)]).toEqual(['once', '2 times', '2 to 5 times', '1 to 3 times']);
});
