import { describe, expect, it } from 'vitest';
import { type Judgement, type JudgeOptions, judgePairing, type Pairing } from '../../model/index.ts';
import { both } from '../support/model-pairings.ts';
import { ALL_CORNERS, currentAt, dimmer, emulators, NOMINAL, resistiveLamp } from './circuits.ts';

function judged(pairing: Pairing, options: JudgeOptions): Judgement {
  const outcome = judgePairing(pairing, options);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.failure));
  return outcome.value;
}

/** its lamp draws 30.7 mA at 30 degrees, the least of its dial: latches nominally, not with 10 % less mains and 20 % more to latch */
const marginal = resistiveLamp(30, 90, { latchingCurrent: both(currentAt(30) * 0.95) });

describe('judging at corners', () => {
  it('judges the nominal corner alone when that is asked for, at the cost of one two-way sweep', () => {
    const { grade, corners, decidedBy, counters } = judged(marginal, NOMINAL);
    expect(grade).toBe('suitable');
    expect(corners.map((c) => c.name)).toEqual(['nominal']);
    expect(decidedBy).toBe('nominal');
    expect(counters).toMatchObject({ stops: 22, sparedStops: 0 });
  });

  it('names the corner that decides, with its reasons, and spares the corners that can change nothing after it', () => {
    const { grade, corners, decidedBy, sparedCorners, reasons, summary } = judged(marginal, ALL_CORNERS);
    expect(corners.map((c) => [c.name, c.grade])).toEqual([
      ['nominal', 'suitable'],
      ['low-mains-cold', 'unsuitable'],
    ]);
    expect(grade).toBe('unsuitable');
    expect(decidedBy).toBe('low-mains-cold');
    expect(sparedCorners).toEqual(['high-mains-cold']);
    expect(reasons.filter((r) => r.corner === 'low-mains-cold').map((r) => r.code)).toContain('failed-latch');
    expect(summary).toContain('low mains, switched on cold (207 V');
  });

  it('is suitable where every corner is, and says that none did worse than the nominal one', () => {
    const { grade, corners, decidedBy, sparedCorners } = judged(emulators(4, dimmer(40, 22)), ALL_CORNERS);
    expect(corners.map((c) => c.grade)).toEqual(['suitable', 'suitable', 'suitable']);
    expect([grade, decidedBy, sparedCorners]).toEqual(['suitable', 'nominal', []]);
  });

  it('asks for the lowest dial setting of the corner that needs the highest one', () => {
    // full dial at 90 degrees: the lower the dial, the later the firing and the less there is to latch on
    const late = resistiveLamp(90, 170, { latchingCurrent: both(currentAt(146)) });
    const { grade, conditions, corners, decidedBy } = judged(late, ALL_CORNERS);
    expect(grade).toBe('conditional');
    const lowest = corners.map((c) => c.lowestDial ?? 0);
    expect(decidedBy).toBe('low-mains-cold');
    expect(conditions.map((c) => c.position)).toEqual([Math.max(...lowest)]);
    // the closed form says which settings latch: 8 degrees of firing angle for each 10 %
    const latches = (dial: number, mains: number, cold: number) => currentAt(170 - 0.8 * dial, mains) > currentAt(146) * cold;
    const fromClosedForm = ALL_CORNERS.dialPositions.find((dial) => latches(dial, 0.9, 1.2));
    expect(conditions[0]?.position).toBe(fromClosedForm);
  });

  it('ends after the nominal corner where that is unsuitable already', () => {
    const hopeless = resistiveLamp(30, 90, { latchingCurrent: both(currentAt(30) * 1.1) });
    const { grade, sparedCorners, counters } = judged(hopeless, ALL_CORNERS);
    expect([grade, sparedCorners]).toEqual(['unsuitable', ['low-mains-cold', 'high-mains-cold']]);
    expect(counters).toMatchObject({ stops: 22, sparedStops: 44 });
  });

  it('refuses a supply band that does not hold the nominal voltage', () => {
    const outcome = judgePairing(marginal, { ...ALL_CORNERS, supplyBand: { low: 1.02, high: 0.9, source: '' } });
    expect(outcome).toMatchObject({ ok: false, failure: { issues: [{ path: 'supplyBand.low' }, { path: 'supplyBand.high' }] } });
  });
});
