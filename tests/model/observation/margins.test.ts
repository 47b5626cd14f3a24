/** Each margin names a change of one part that brings another outcome about: less than the margin changes nothing, more does. */
import { describe, expect, it } from 'vitest';
import { sweepDial } from '../../../model/observation/dial-sweep.ts';
import type { Dimmer, Pairing } from '../../../model/pairing.ts';
import type { DialRow } from '../../../model/verdict.ts';
import { both, diacDrive, everydayDimmer, filament, firedAt, mains230, pairing } from '../../support/model-pairings.ts';

const observed = (judged: Pairing, position: number): DialRow => sweepDial(judged, [position]).rows[0] as DialRow;

const withDimmer = (change: Partial<Dimmer>, power: number): Pairing =>
  pairing(mains230, everydayDimmer(change), filament(power, mains230));

describe('the breakover margin of a dark row', () => {
  // the resistance falls by 5 % a stop, so that each stop starts close to how it settles: a jump would fire once by itself
  const potentiometer = 1.5e6;
  const positions = Array.from({ length: 32 }, (_, k) => 100 * (1 - 0.95 ** k));
  const rising = (breakover: number): DialRow[] =>
    sweepDial(withDimmer({ drive: diacDrive({ potentiometer, breakover: both(breakover) }) }, 40), positions).rows.filter(
      (row) => row.sweep === 'up',
    );
  const lastDark = (rows: readonly DialRow[]): number => rows.findIndex((row) => row.state !== 'dark') - 1;

  it('is the share by which the diac would have to break over earlier for the lamp to light there', () => {
    const rows = rising(32);
    const stop = lastDark(rows);
    expect(stop).toBeGreaterThan(5);
    const margin = rows[stop]?.margins.breakover as number;
    expect(rising(32 * (1 - 0.95 * margin))[stop]?.state).toBe('dark');
    expect(rising(32 * (1 - 1.05 * margin))[stop]?.state).not.toBe('dark');
  });

  it('under one per cent marks the row as near an edge, and only then', () => {
    const rows = rising(32);
    const stop = lastDark(rows);
    const edge = 32 * (1 - (rows[stop]?.margins.breakover as number));
    expect(rising(edge / 0.995)[stop]?.nearEdge).toBe(true);
    expect(rising(edge / 0.98)[stop]?.nearEdge).toBe(false);
  });
});

describe('the latching margin', () => {
  // 7 W at 230 V fired at 120 degrees carries 37.3 mA: no snubber, so that nothing else passes the triac
  const dimmer = (latching: number): Pairing =>
    withDimmer({ snubber: null, drive: firedAt(120), latchingCurrent: both(latching), holdingCurrent: both(5e-3) }, 7);

  it.each([
    ['reached', 30e-3, 0],
    ['missed', 45e-3, 1],
  ])('of a latching current that is %s is the share by which it would have to differ for the other outcome', (_, latching, failures) => {
    const row = observed(dimmer(latching), 50);
    expect(row.failedLatches).toBe(failures);
    const margin = row.margins.latching as number;
    const towards = failures === 0 ? 1 : -1;
    expect(observed(dimmer(latching * (1 + towards * 0.98 * margin)), 50).failedLatches).toBe(failures);
    expect(observed(dimmer(latching * (1 + towards * 1.02 * margin)), 50).failedLatches).toBe(1 - failures);
  });
});

describe('the holding margin', () => {
  // 15 W at 230 V: some 48 mA remain 30 degrees before the lamp's own end, where an end of conduction stops being early
  const dimmer = (holding: number): Pairing =>
    withDimmer({ snubber: null, drive: firedAt(60), latchingCurrent: both(70e-3), holdingCurrent: both(holding) }, 15);

  // the angle at which the lamp's own current counts as ended moves a little with the holding current: a fifth less and a fifth more
  it.each([
    ['held just long enough', 46e-3, 'steady', 'dropping-out'],
    ['lost too early', 52e-3, 'dropping-out', 'steady'],
  ])('of a current %s is the share by which the holding current would have to differ', (_, holding, state, other) => {
    const row = observed(dimmer(holding), 50);
    expect(row.state).toBe(state);
    const margin = row.margins.holding as number;
    const towards = state === 'steady' ? 1 : -1;
    expect(observed(dimmer(holding * (1 + towards * 0.8 * margin)), 50).state).toBe(state);
    expect(observed(dimmer(holding * (1 + towards * 1.2 * margin)), 50).state).toBe(other);
  });

  it('is wide for a lamp that draws many times the holding current', () => {
    expect(observed(withDimmer({ snubber: null, drive: firedAt(60) }, 200), 50).margins.holding).toBeGreaterThan(5);
  });
});
