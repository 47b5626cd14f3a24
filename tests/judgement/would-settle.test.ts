import { describe, expect, it } from 'vitest';
import { type AssumedValue, judgePairing, type Pairing } from '../../model/index.ts';
import { both } from '../support/model-pairings.ts';
import { ALL_CORNERS, currentAt, NOMINAL, PULSE_ANGLE, resistiveLamp } from './circuits.ts';

const assuming = (low: number, high: number): AssumedValue => ({ path: 'dimmer.drive.firingAngleFull', range: { low, high } });

function judged(pairing: Pairing, ...assumed: AssumedValue[]) {
  const outcome = judgePairing(pairing, { ...ALL_CORNERS, assumed });
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.failure));
  return outcome.value;
}

/** at the low-mains cold corner it latches from 30 degrees on: until the short pulse ends, from 30 degrees less its length */
const LATCHES_FROM = 30 - PULSE_ANGLE;
const latchingCurrent = both((currentAt(30, 0.9) / 1.2) * 1.0001);
const firedFrom = (full: number) => resistiveLamp(full, 90, { latchingCurrent });

describe('a grade that hinges on an assumed value', () => {
  it('is undetermined, and names the value and the threshold of the closed form, from the good side', () => {
    const { grade, wouldSettle, conditions, summary } = judged(firedFrom(40), assuming(20, 60));
    expect(grade).toBe('undetermined');
    expect(conditions).toEqual([]);
    if (wouldSettle?.kind !== 'value') throw new Error('nothing would settle it');
    const { threshold } = wouldSettle;
    expect(threshold.low).toBeLessThan(LATCHES_FROM + 0.01);
    expect(threshold.high).toBeGreaterThan(LATCHES_FROM - 0.01);
    // 1/64 of the way from 40 to 20 degrees
    expect(threshold.high - threshold.low).toBeLessThanOrEqual(20 / 64 + 1e-9);
    expect(wouldSettle).toMatchObject({
      path: 'dimmer.drive.firingAngleFull',
      assumed: 40,
      gradeBelow: 'unsuitable',
      gradeAbove: 'suitable',
      corner: 'low-mains-cold',
      alsoOpen: [],
      measure: expect.stringContaining('Record the voltage'),
    });
    expect(summary).toBe(wouldSettle.detail);
    expect(summary).toMatch(/assumed \(40 deg\): above about (29|30)[.0-9]* deg the lamps run/);
  });

  it('is undetermined from the bad side too, with the same threshold', () => {
    const { grade, wouldSettle } = judged(firedFrom(25), assuming(20, 60));
    expect(grade).toBe('undetermined');
    if (wouldSettle?.kind !== 'value') throw new Error('nothing would settle it');
    expect(wouldSettle.threshold.low).toBeLessThan(LATCHES_FROM + 0.01);
    expect(wouldSettle.threshold.high).toBeGreaterThan(LATCHES_FROM - 0.01);
    expect([wouldSettle.gradeBelow, wouldSettle.gradeAbove]).toEqual(['unsuitable', 'suitable']);
  });

  it('gives the threshold over every corner where the nominal one, which fails first, works long before the others', () => {
    // at nominal mains, warm, it latches from 22 degrees on, at low mains in the cold from 30
    const { grade, corners, wouldSettle } = judged(firedFrom(15), assuming(10, 60));
    expect([grade, corners.map((c) => [c.name, c.grade])]).toEqual(['undetermined', [['nominal', 'unsuitable']]]);
    if (wouldSettle?.kind !== 'value') throw new Error('nothing would settle it');
    const { threshold, gradeBelow, gradeAbove, corner } = wouldSettle;
    expect(threshold.low).toBeLessThan(LATCHES_FROM + 0.01);
    expect(threshold.high).toBeGreaterThan(LATCHES_FROM - 0.01);
    // 1/64 of the way from 15 to 60 degrees
    expect(threshold.high - threshold.low).toBeLessThanOrEqual(45 / 64 + 1e-9);
    expect([gradeBelow, gradeAbove, corner]).toEqual(['unsuitable', 'suitable', 'low-mains-cold']);
    const sure = [threshold.low, threshold.high].map((angle) => judgePairing(firedFrom(angle), ALL_CORNERS));
    expect(sure.map((o) => o.ok && o.value.grade)).toEqual(['unsuitable', 'suitable']);
  });

  it('is sure where the value cannot lie beyond the threshold', () => {
    expect(judged(firedFrom(40), assuming(32, 60))).toMatchObject({ grade: 'suitable', wouldSettle: null });
    expect(judged(firedFrom(25), assuming(20, 28))).toMatchObject({ grade: 'unsuitable', wouldSettle: null });
  });

  it('takes the usual range of such a part where none is given', () => {
    // 10 to 40 degrees: down to 10 the lamp does not latch
    const usual: AssumedValue = { path: 'dimmer.drive.firingAngleFull', range: null };
    expect(judged(firedFrom(40), usual)).toMatchObject({ grade: 'undetermined' });
  });

  it('names the value whose threshold lies nearest to what was assumed, as a share of its range', () => {
    // the low end of the dial fails only from 150 degrees on, far from the 90 that were assumed
    const far: AssumedValue = { path: 'dimmer.drive.firingAngleLow', range: { low: 90, high: 170 } };
    const { wouldSettle } = judged(firedFrom(32), far, assuming(20, 60));
    expect(wouldSettle).toMatchObject({ path: 'dimmer.drive.firingAngleFull', alsoOpen: [] });
  });

  it('leaves out what is not in the circuit, what cannot matter, and parts that were taken as absent', () => {
    const assumed = ['dimmer.drive.breakover', 'dimmer.onVoltage', 'dimmer.interferenceCapacitance', 'lamps[3].lamp.input.capacitance'];
    const { grade, wouldSettle } = judged(firedFrom(40), ...assumed.map((path) => ({ path, range: null })));
    expect([grade, wouldSettle]).toEqual(['suitable', null]);
  });

  it('is not asked for where only the nominal corner is judged', () => {
    const outcome = judgePairing(firedFrom(40), { ...NOMINAL, assumed: [assuming(5, 60)] });
    expect(outcome).toMatchObject({ ok: true, value: { grade: 'suitable', wouldSettle: null } });
  });

  it('refuses a range that is none', () => {
    const outcome = judgePairing(firedFrom(40), { ...ALL_CORNERS, assumed: [assuming(60, 20)] });
    expect(outcome).toMatchObject({ ok: false, failure: { issues: [{ path: 'assumed[0].range' }] } });
  });
});
