/**
 * Scaling every voltage and current alike changes no angle. The bridge's drop, the spans of an active bleeder and of a curve that starts
 * at 0 V are fixed voltages, so the circuits are those in which none of them plays a part: resistive lamps, and tables that begin with
 * no current, whose points are moved so that the curve behind the drop scales.
 */
import fc from 'fast-check';
import { expect, test } from 'vitest';
import type { Dimmer, Lamp, Pairing, PerPolarity } from '../../../model/pairing.ts';
import { BRIDGE_DROP } from '../../../model/tolerances.ts';
import { angleDistance, anglesFromRest } from '../../support/model-angles.ts';
import { builtPairings, dialPositions, PATIENCE, runsOf } from '../../support/model-arbitrary.ts';

function scalable(lamp: Lamp): Lamp {
  const { input, load } = lamp;
  const bleeder = input.bleeder?.kind === 'active' ? null : input.bleeder;
  if (load.kind === 'resistive') return { ...lamp, input: { ...input, bleeder } };
  if (load.kind === 'reservoir') return { ...lamp, input: { ...input, bleeder }, load: { kind: 'resistive', resistance: 2000 } };
  const points = load.points.map((p, k) => ({ voltage: p.voltage + 1, current: k === 0 ? 0 : p.current }));
  return { ...lamp, input: { ...input, bleeder }, load: { kind: 'iv-table', points } };
}

function scaled(pairing: Pairing, by: number): Pairing {
  const both = (p: PerPolarity): PerPolarity => ({ positive: by * p.positive, negative: by * p.negative });
  const { dimmer } = pairing;
  const { drive } = dimmer;
  const scaledDimmer: Dimmer = {
    ...dimmer,
    latchingCurrent: both(dimmer.latchingCurrent),
    holdingCurrent: both(dimmer.holdingCurrent),
    onVoltage: by * dimmer.onVoltage,
    drive:
      drive.kind === 'timed'
        ? drive
        : {
            ...drive,
            breakover: both(drive.breakover),
            residualVoltage: by * drive.residualVoltage,
            diacHoldingCurrent: by * drive.diacHoldingCurrent,
            gateVoltage: by * drive.gateVoltage,
            gateThreshold: by * drive.gateThreshold,
          },
  };
  const lamps = pairing.lamps.map(({ count, lamp }) => {
    if (lamp.load.kind !== 'iv-table') return { count, lamp };
    const points = lamp.load.points.map((p) => ({
      voltage: by * (p.voltage + BRIDGE_DROP) - BRIDGE_DROP,
      current: by * p.current,
    }));
    return { count, lamp: { ...lamp, load: { kind: 'iv-table' as const, points } } };
  });
  return { ...pairing, mains: { ...pairing.mains, voltage: by * pairing.mains.voltage }, dimmer: scaledDimmer, lamps };
}

const circuits = builtPairings.map((p) => ({ ...p, lamps: p.lamps.map(({ count, lamp }) => ({ count, lamp: scalable(lamp) })) }));

test('doubled, a circuit of resistive lamps does the same to the bit', { timeout: PATIENCE }, () => {
  const resistive = circuits
    .map((p) => ({ ...p, lamps: p.lamps.filter(({ lamp }) => lamp.load.kind === 'resistive') }))
    .filter((p) => p.lamps.length > 0);
  fc.assert(
    fc.property(resistive, dialPositions, (pairing, dial) => {
      expect(anglesFromRest(scaled(pairing, 2), dial, 4)).toEqual(anglesFromRest(pairing, dial, 4));
    }),
    runsOf(40),
  );
});

test('raised by any factor, a circuit fires and lets go at the same angles', { timeout: PATIENCE }, () => {
  fc.assert(
    fc.property(circuits, dialPositions, fc.integer({ min: 11, max: 40 }), (pairing, dial, tenths) => {
      const [plain, other] = [anglesFromRest(pairing, dial, 3), anglesFromRest(scaled(pairing, tenths / 10), dial, 3)];
      expect(angleDistance(other, plain)).toBeLessThan(0.01);
    }),
    runsOf(40),
  );
});
