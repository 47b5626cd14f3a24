import { describe, expect, it } from 'vitest';
import { type CornerName, supplyBand } from '../../model/index.ts';
import { atCorner, cornersOf } from '../../model/judgement/corners.ts';
import { both, mains120 } from '../support/model-pairings.ts';
import { ALL_CORNERS, dimmer, emulators, NOMINAL } from './circuits.ts';

const pairing = emulators(2, dimmer(50, 30));
const names = (corners: readonly { readonly name: CornerName }[]) => corners.map((c) => c.name);

describe('the corners of a pairing', () => {
  it('are the nominal one alone where only that is asked for', () => {
    expect(names(cornersOf(pairing, NOMINAL))).toEqual(['nominal']);
  });

  it('are nominal, and both ends of the supply band with cold, larger currents', () => {
    const [nominal, low, high, ...more] = cornersOf(pairing, ALL_CORNERS);
    expect(more).toEqual([]);
    expect(nominal).toMatchObject({ name: 'nominal', mainsVoltage: 230, latchingCurrent: both(0.05) });
    // EN 50160: +-10 %; a triac's currents at 0 degrees are about 1.2 times those at 25
    expect(low?.mainsVoltage).toBeCloseTo(207, 9);
    expect(high?.mainsVoltage).toBeCloseTo(253, 9);
    expect(low?.latchingCurrent.positive).toBeCloseTo(0.06, 12);
    expect(high?.holdingCurrent.negative).toBeCloseTo(0.036, 12);
  });

  it('take another supply band where one is given', () => {
    const band = { low: 0.85, high: 1.05, source: 'measured in the house' };
    const [, low, high] = cornersOf(pairing, { ...ALL_CORNERS, supplyBand: band });
    expect(low?.mainsVoltage).toBeCloseTo(195.5, 9);
    expect(high?.mainsVoltage).toBeCloseTo(241.5, 9);
  });

  it('include typical currents where any is given, and never a holding current above the latching current', () => {
    const typical = emulators(2, dimmer(50, 30, { typicalLatchingCurrent: both(0.02) }));
    const last = cornersOf(typical, ALL_CORNERS).at(-1);
    expect(last).toMatchObject({ name: 'typical-currents', latchingCurrent: both(0.02), holdingCurrent: both(0.02) });
  });

  it('change mains and currents of the pairing and nothing else', () => {
    const [, low] = cornersOf(pairing, ALL_CORNERS);
    if (low === undefined) throw new Error('no low corner');
    const there = atCorner(pairing, low);
    expect(there.mains).toEqual({ ...pairing.mains, voltage: low.mainsVoltage });
    expect(there.dimmer).toEqual({ ...pairing.dimmer, latchingCurrent: low.latchingCurrent, holdingCurrent: low.holdingCurrent });
    expect(there.lamps).toBe(pairing.lamps);
  });
});

describe('the supply band', () => {
  it('is that of the European standard for 230 V and that of the international one elsewhere, with the source named', () => {
    expect(supplyBand(pairing.mains)).toMatchObject({ low: 0.9, high: 1.1, source: expect.stringContaining('EN 50160') });
    expect(supplyBand(mains120)).toMatchObject({ low: 0.9, high: 1.1, source: expect.stringContaining('IEC 60038') });
  });
});
