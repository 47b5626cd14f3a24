/** Laying out the circuit: what is absent takes no part, and lamps of a kind are one lamp of their number. */
import { describe, expect, test } from 'vitest';
import { layNetwork } from '../../../model/circuit/network.ts';
import type { Pairing } from '../../../model/pairing.ts';
import {
  bareLamp,
  diacDrive,
  emulator,
  everydayDimmer,
  filament,
  idealDimmer,
  mains230,
  pairing,
  reservoirLamp,
} from '../../support/model-pairings.ts';

const statesOf = (p: Pairing): number => layNetwork(p).states;

describe('the layout of a circuit', () => {
  test('holds a state for every capacitor and inductor that is there and for nothing else', () => {
    const bare = pairing(mains230, idealDimmer(), bareLamp({ kind: 'resistive', resistance: 1000 }));
    expect(statesOf(bare)).toBe(0);
    const { dimmer } = pairing(mains230, everydayDimmer(), emulator(8, mains230));
    // choke, snubber, timing, input capacitor
    expect(statesOf(pairing(mains230, dimmer, emulator(8, mains230)))).toBe(4);
    const full = everydayDimmer({
      interferenceCapacitance: 100e-9,
      drive: diacDrive({ secondSection: { resistance: 10e3, capacitance: 22e-9 } }),
    });
    const lamp = reservoirLamp(8, 4.7e-6, 60, {
      inductance: 1e-3,
      damper: { resistance: 470, capacitance: 100e-9 },
      bleeder: { kind: 'resistor-capacitor', resistance: 470, capacitance: 100e-9 },
    });
    expect(statesOf(pairing(mains230, full, lamp, 1, { kind: 'resistor-capacitor', resistance: 100, capacitance: 100e-9 }))).toBe(11);
  });

  test('takes a snubber, damper, bleeder or added load without capacitance for none', () => {
    const lamp = filament(40, mains230, {
      damper: { resistance: 100, capacitance: 0 },
      bleeder: { kind: 'resistor-capacitor', resistance: 470, capacitance: 0 },
    });
    const dimmer = idealDimmer({ snubber: { resistance: 100, capacitance: 0 } });
    expect(statesOf(pairing(mains230, dimmer, lamp, 1, { kind: 'resistor-capacitor', resistance: 100, capacitance: 0 }))).toBe(0);
  });

  test('gives a lamp whose curve falls a stray capacitor where it has none of its own', () => {
    const falling = (capacitance: number) =>
      bareLamp(
        {
          kind: 'iv-table',
          points: [
            { voltage: 50, current: 0.1 },
            { voltage: 300, current: 0.02 },
          ],
        },
        { capacitance },
      );
    expect(statesOf(pairing(mains230, idealDimmer(), falling(0)))).toBe(1);
    expect(statesOf(pairing(mains230, idealDimmer(), falling(10e-9)))).toBe(1);
  });

  test('makes one group of lamps of a kind, wherever they stand in the list', () => {
    const [a, b] = [emulator(8, mains230), filament(40, mains230)];
    const mixed = (lamps: Pairing['lamps']): Pairing => ({ mains: mains230, dimmer: everydayDimmer(), lamps, addedLoad: null });
    const apart = layNetwork(
      mixed([
        { count: 2, lamp: a },
        { count: 1, lamp: b },
        { count: 3, lamp: structuredClone(a) },
      ]),
    );
    const together = layNetwork(
      mixed([
        { count: 5, lamp: a },
        { count: 1, lamp: b },
      ]),
    );
    expect(apart).toEqual(together);
    expect(apart.groups).toHaveLength(2);
  });

  test('makes N lamps one lamp of N times the current and capacitance and an Nth of the resistance', () => {
    const one = layNetwork(pairing(mains230, everydayDimmer(), emulator(8, mains230), 1));
    const five = layNetwork(pairing(mains230, everydayDimmer(), emulator(8, mains230), 5));
    expect(five.inputs[0]?.conductance).toBeCloseTo(5 * (one.inputs[0]?.conductance ?? 0), 12);
    one.groups[0]?.curve?.forEach((s, k) => {
      expect(five.groups[0]?.curve?.[k]?.from).toBe(s.from);
      expect(five.groups[0]?.curve?.[k]?.slope).toBeCloseTo(5 * s.slope, 15);
    });
    const capacitor = (n: typeof one): number => n.capacitors.find((c) => c.b < 0)?.capacitance ?? 0;
    expect(capacitor(five)).toBeCloseTo(5 * capacitor(one), 18);
  });
});
