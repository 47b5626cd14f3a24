/** The table of dial states: which hold for given figures, and which of them heads the list. */
import { describe, expect, test } from 'vitest';
import { dialStates, thresholdsAt } from '../../../model/observation/dial-state.ts';
import { dialRow } from '../../support/model-dial-rows.ts';

const at50 = thresholdsAt(50);
const firings = (min: number, max: number) => ({ firings: { min, mean: (min + max) / 2, max } });

describe('the dial states', () => {
  test.each([
    ['no half-cycle fires', { ...firings(0, 0), silentShare: 1 }, ['dark']],
    ['no half-cycle fires, whatever else was counted', { ...firings(0, 0), silentShare: 1, earlyDropOuts: 1, variation: 1 }, ['dark']],
    ['every half-cycle fires once, alike', {}, ['steady']],
    ['some half-cycles fire and some do not', { ...firings(0, 1), silentShare: 0.25 }, ['skipping']],
    ['one observed half-cycle fires twice', firings(1, 2), ['re-firing']],
    ['some fire twice and some not at all', { ...firings(0, 2), silentShare: 0.1 }, ['skipping', 're-firing']],
    ['conduction ends early and nothing fires again', { earlyDropOuts: 0.5 }, ['dropping-out']],
    ['conduction ends early and fires again', { ...firings(2, 2), earlyDropOuts: 1 }, ['re-firing']],
    ['the polarities differ by more than the limit', { polarityDifference: 0.0126 }, ['lopsided']],
    ['the polarities differ by the limit', { polarityDifference: 0.0125 }, ['steady']],
    ['energy varies by more than the limit', { variation: 0.0081 }, ['wandering']],
    ['energy varies by the limit', { variation: 0.008 }, ['steady']],
    ['energy varies because half-cycles stay silent', { ...firings(0, 1), silentShare: 0.5, variation: 1 }, ['skipping']],
    ['energy varies because half-cycles fire again', { ...firings(1, 3), variation: 0.2 }, ['re-firing']],
    [
      'everything at once, in the order of the table',
      { ...firings(0, 3), silentShare: 0.1, polarityDifference: 0.1, variation: 0.5, earlyDropOuts: 1 },
      ['skipping', 're-firing', 'lopsided'],
    ],
    [
      'once each, early, lopsided and varying',
      { earlyDropOuts: 1, polarityDifference: 0.1, variation: 0.5 },
      ['dropping-out', 'lopsided', 'wandering'],
    ],
  ])('%s', (_, figures, expected) => {
    expect(dialStates(dialRow(50, figures), at50)).toEqual(expected);
  });

  test('the limits follow the mains frequency: 0.8 % and 1.25 % at 50 Hz, 1 % and 1.5 % at 60 Hz', () => {
    expect(at50).toEqual({ variation: 0.008, polarityDifference: 0.0125 });
    const at60 = thresholdsAt(60);
    expect(at60.variation).toBe(0.01);
    expect(at60.polarityDifference).toBeCloseTo(0.015, 12);
  });
});
