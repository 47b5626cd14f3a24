import { describe, expect, it } from 'vitest';
import { judgePairing } from '../../model/index.ts';
import { isDecided } from '../../model/judgement/early-ending.ts';
import { darkRow, dialRow, refiringRow } from '../support/model-dial-rows.ts';
import { both, linearString, mains230, pairing as pairingOf, reservoirLamp } from '../support/model-pairings.ts';
import { ALL_CORNERS, currentAt, dimmer, emulators, resistiveLamp, ringing } from './circuits.ts';

const unrated = { maximumCurrent: null, maximumPeakCurrent: null, minimumLoad: null, maximumLoad: null };
const positions = ALL_CORNERS.dialPositions;
const pairing = emulators(2, dimmer(50, 30));
const decided = (goal: 'grade' | 'suitable', ...rows: Parameters<typeof isDecided>[2]) => isDecided(goal, pairing, rows, positions);

describe('ending a sweep early', () => {
  it('goes on while everything is steady or dark', () => {
    expect(decided('suitable', darkRow(0), darkRow(10), dialRow(20))).toBe(false);
  });

  it('ends at the first upset where only suitable counts, and goes on where a steady range above may be left', () => {
    expect(decided('suitable', dialRow(0), refiringRow(10, 2))).toBe(true);
    expect(decided('grade', dialRow(0), refiringRow(10, 2))).toBe(false);
  });

  it('ends once the range left at the top is too narrow to be of use', () => {
    // a useful range spans 20 % of the dial: 80 to 100 still does
    expect(decided('grade', refiringRow(70, 2))).toBe(false);
    expect(decided('grade', refiringRow(80, 2))).toBe(true);
  });

  it('ends where a lamp goes dark above a setting at which it was lit', () => {
    expect(decided('suitable', dialRow(10), darkRow(20))).toBe(true);
  });

  it('never ends on an undecided position, which might be steady', () => {
    expect(decided('suitable', dialRow(0, { state: 'undecided' }))).toBe(false);
  });

  it('ends as soon as a rating is exceeded', () => {
    const rated = emulators(2, dimmer(50, 30, { ratings: { ...pairing.dimmer.ratings, maximumPeakCurrent: 1 } }));
    expect(isDecided('grade', rated, [dialRow(0, { peakCurrent: 0.9 })], positions)).toBe(false);
    expect(isDecided('grade', rated, [dialRow(0, { peakCurrent: 1.1 })], positions)).toBe(true);
  });

  it.each([
    ['one lamp like a resistor', emulators(1, dimmer(50, 30))],
    ['two', emulators(2, dimmer(50, 30))],
    ['four', emulators(4, dimmer(50, 30))],
    ['one that is conditional in the cold', emulators(1, dimmer(25, 14), 100e-9)],
    ['lamps that ring', ringing(2)],
    ['lamps that ring harder', ringing(5)],
    ['a string with a high knee', pairingOf(mains230, dimmer(25, 14), linearString(200, 0.04), 4)],
    ['reservoir lamps', pairingOf(mains230, dimmer(50, 30), reservoirLamp(8, 4.7e-6, 50), 2)],
    ['a lamp that latches by a hair', resistiveLamp(30, 90, { latchingCurrent: both(currentAt(30, 0.9) / 1.2) })],
    ['a lamp whose current is over the rating', resistiveLamp(30, 90, { ratings: { ...unrated, maximumPeakCurrent: 0.065 } })],
  ])('gives %s the grade, the deciding corner and the conditions that it gets without', (_, any) => {
    const early = judgePairing(any, ALL_CORNERS);
    const whole = judgePairing(any, { ...ALL_CORNERS, thorough: true });
    if (!early.ok || !whole.ok) throw new Error('refused');
    expect(whole.value.counters.sparedStops).toBe(0);
    expect(early.value.counters.stops + early.value.counters.sparedStops).toBe(whole.value.counters.stops);
    const told = ({ grade, decidedBy, conditions, dial, popOn }: typeof early.value) => ({ grade, decidedBy, conditions, dial, popOn });
    expect(told(early.value)).toEqual(told(whole.value));
  });
});
