import { describe, expect, it } from 'vitest';
import { type JudgeOptions, judgeCounts, type LampCounts, type Pairing } from '../../model/index.ts';
import { both } from '../support/model-pairings.ts';
import { ALL_CORNERS, currentAt, dimmer, emulators, NOMINAL, PEAK, resistiveLamp, ringing } from './circuits.ts';

function counted(pairing: Pairing, from: number, to: number, options: JudgeOptions): LampCounts {
  const outcome = judgeCounts(pairing, { from, to, group: 0 }, options);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.failure));
  return outcome.value;
}

const unrated = { maximumCurrent: null, maximumPeakCurrent: null, minimumLoad: null, maximumLoad: null };
const graded = ({ counts }: LampCounts) => counts.map((c) => c.grade);

describe('judging lamp counts', () => {
  it('finds the smallest count whose currents together latch, as the closed form has it', () => {
    // 30.7 mA a lamp at 30 degrees, the least of this dial: 100 mA takes four
    const pairing = resistiveLamp(30, 90, { latchingCurrent: both(0.1) });
    const result = counted(pairing, 1, 6, NOMINAL);
    expect(result.smallest).toBe(Math.ceil(0.1 / currentAt(30)));
    expect(result).toMatchObject({ largest: 6, unbroken: true, below: 'latching', above: null });
  });

  it('asks more lamps for at low mains and in the cold', () => {
    const pairing = resistiveLamp(30, 90, { latchingCurrent: both(0.1) });
    expect(counted(pairing, 1, 6, ALL_CORNERS).smallest).toBe(Math.ceil(0.12 / currentAt(30, 0.9)));
  });

  it('stops where the peak current passes the rating', () => {
    // fired at 90 degrees at the latest, every lamp adds the crest of 61.5 mA
    const perLamp = PEAK / 5290;
    const ratings = { ...unrated, maximumPeakCurrent: 0.2 };
    const result = counted(resistiveLamp(30, 90, { ratings }), 1, 5, NOMINAL);
    expect(result).toMatchObject({ smallest: 1, largest: Math.floor(0.2 / perLamp), above: 'peak-current' });
    expect(result.summary).toContain("With more, the current's peak passes the dimmer's rating.");
  });

  it('stops at the load rating, and simulates nothing that it rules out', () => {
    const ratings = { ...unrated, maximumLoad: 25 };
    const within = counted(resistiveLamp(30, 90, { ratings }, 1, 10), 1, 2, NOMINAL);
    const beyond = counted(resistiveLamp(30, 90, { ratings }, 1, 10), 1, 9, NOMINAL);
    expect(beyond).toMatchObject({ smallest: 1, largest: 2, above: 'rating' });
    expect(beyond.counters.stops).toBe(within.counters.stops);
  });

  it('tells holding from ringing: one lamp draws too little, several ring too hard', () => {
    const { counts } = counted(emulators(1, dimmer(50, 30), 100e-9), 1, 1, NOMINAL);
    expect(counts[0]).toMatchObject({ grade: 'unsuitable', cause: 'holding' });
    expect(counted(ringing(1), 5, 5, NOMINAL).counts[0]).toMatchObject({ grade: 'unsuitable', cause: 'ringing' });
  });

  it('finds workable counts on both sides of unworkable ones where more lamps first ring harder and then hold', () => {
    const result = counted(ringing(1), 1, 9, NOMINAL);
    const workable = result.counts.filter((c) => c.cause === null).map((c) => c.count);
    expect(workable).toContain(2);
    expect(workable).toContain(9);
    expect(workable).not.toContain(5);
    expect(result).toMatchObject({ smallest: 2, largest: 9, unbroken: false });
    expect(result.summary).toMatch(/^Steady with 2 to 9 lamps, but not with 3/);
  });

  it('says why where no count works', () => {
    const result = counted(resistiveLamp(30, 90, { latchingCurrent: both(1) }), 1, 3, NOMINAL);
    expect(graded(result)).toEqual(['unsuitable', 'unsuitable', 'unsuitable']);
    expect(result).toMatchObject({ smallest: null, largest: null, below: null, above: null });
    expect(result.summary).toContain('latching current');
  });

  it('refuses a range that is none, too long, or of a group that is not there', () => {
    const pairing = resistiveLamp(30, 90);
    const refused = (from: number, to: number, group = 0) => {
      const outcome = judgeCounts(pairing, { from, to, group }, NOMINAL);
      return outcome.ok ? [] : outcome.failure.issues.map((i) => i.path);
    };
    expect(refused(0, 3)).toEqual(['lampCount.from']);
    expect(refused(4, 3)).toEqual(['lampCount.to']);
    expect(refused(1, 500)).toEqual(['lampCount.to']);
    expect(refused(1, 2, 1)).toEqual(['lampCount.group']);
  });
});
