import { describe, expect, it } from 'vitest';
import { ASSUMABLE_PATHS } from '../../model/index.ts';
import { checkOptions, checkPairing } from '../../model/pairing-check.ts';
import { askedPairing } from '../../server/schemas/pairing.ts';
import { shownPairing } from '../../server/simulation/asked-circuit.ts';
import { assumedInModel, assumedOnWire } from '../../server/verdicts/assumed-values.ts';
import { completePairing } from '../../server/verdicts/pairing-completion.ts';
import { toModel } from '../../server/verdicts/pairing-to-model.ts';
import { examplePairing, fullPairing, type Loose } from '../support/server-pairings.ts';
import { numberLeaves } from './schema-leaves.ts';

function question(pairing: Loose) {
  return toModel(completePairing(askedPairing.parse(pairing)));
}

/** of lamps that are all given by their circuit */
function convert(pairing: Loose) {
  const { pairing: asked, options } = question(pairing);
  return { pairing: shownPairing(asked, []), options };
}

describe('converting a pairing to the model', () => {
  it('gives SI units, to the last bit', () => {
    const { pairing, options } = convert(fullPairing('diac'));
    expect(pairing).toEqual({
      mains: { voltage: 230, frequency: 50, sourceResistance: 0.4 },
      dimmer: {
        latchingCurrent: { positive: 0.06, negative: 0.06 },
        holdingCurrent: { positive: 0.035, negative: 0.035 },
        typicalLatchingCurrent: { positive: 0.04, negative: 0.04 },
        typicalHoldingCurrent: null,
        turnOffTime: 20e-6,
        onVoltage: 1.1,
        onResistance: 0.04,
        wiring: 'three-wire',
        choke: { inductance: 1.5e-3, resistance: 0.6, lossResistance: 3000 },
        snubber: { resistance: 47, capacitance: 68e-9 },
        interferenceCapacitance: 100e-9,
        ratings: { maximumCurrent: 1.5, maximumPeakCurrent: 16, minimumLoad: 10, maximumLoad: 300 },
        drive: {
          kind: 'diac',
          fixedResistance: 6800,
          potentiometer: 330e3,
          capacitance: 100e-9,
          breakover: { positive: 32, negative: 33 },
          residualVoltage: 12,
          diacResistance: 10,
          diacHoldingCurrent: 5e-3,
          gateResistance: 100,
          gateVoltage: 0.9,
          gateThreshold: 15e-3,
          secondSection: { resistance: 10e3, capacitance: 47e-9 },
        },
      },
      lamps: [
        {
          count: 2,
          lamp: {
            ratedPower: 8,
            input: {
              seriesResistance: 22,
              seriesCapacitance: 4.7e-6,
              inductance: 2e-3,
              inductorLoss: 4000,
              capacitance: 47e-9,
              damper: { resistance: 470, capacitance: 100e-9 },
              bleeder: { kind: 'resistor', resistance: 47e3 },
            },
            load: { kind: 'reservoir', capacitance: 4.7e-6, surgeResistance: 10, drain: { kind: 'power', power: 7 }, minimumVoltage: 60 },
          },
        },
        {
          count: 1,
          lamp: expect.objectContaining({
            input: expect.objectContaining({ bleeder: { kind: 'resistor-capacitor', resistance: 1000, capacitance: 220e-9 } }),
            load: expect.objectContaining({ drain: { kind: 'current', current: 0.02 } }),
          }),
        },
        {
          count: 3,
          lamp: expect.objectContaining({
            input: expect.objectContaining({ bleeder: { kind: 'active', current: 0.03, below: 80 } }),
            load: {
              kind: 'iv-table',
              points: [
                { voltage: 0, current: 0 },
                { voltage: 200, current: 1e-3 },
                { voltage: 325, current: 0.04 },
              ],
            },
          }),
        },
        { count: 1, lamp: expect.objectContaining({ load: { kind: 'resistive', resistance: 2116 } }) },
      ],
      addedLoad: { kind: 'resistor', resistance: 8200 },
    });
    expect(options).toEqual({
      dialPositions: [20, 60, 100],
      corners: 'nominal',
      dropOutAngle: 25,
      supplyBand: { low: 0.94, high: 1.06, source: expect.any(String) },
      assumed: [],
      lampCount: { from: 1, to: 2, group: 1 },
      remedies: false,
    });
  });

  it('gives each polarity its own currents, and the maximum where only the other polarity has a typical value', () => {
    const { dimmer } = convert(fullPairing('timed')).pairing;
    expect(dimmer.latchingCurrent).toEqual({ positive: 0.06, negative: 0.07 });
    expect(dimmer.typicalLatchingCurrent).toEqual({ positive: 0.06, negative: 0.05 });
    expect(dimmer.holdingCurrent).toEqual({ positive: 0.03, negative: 0.035 });
    expect(dimmer.typicalHoldingCurrent).toEqual({ positive: 0.02, negative: 0.035 });
    expect(dimmer.drive).toEqual({
      kind: 'timed',
      firingAngleFull: 20,
      firingAngleLow: 150,
      gatePulse: 100e-6,
      pulses: 'train',
      pulseSpacing: 500e-6,
    });
  });

  it('takes every part whose capacitor is zero for absent, and lets every other zero through', () => {
    const zeros = fullPairing('diac');
    zeros.dimmer.snubber.capacitance_nF = 0;
    zeros.dimmer.drive.secondSection = { resistance_kOhm: 1, capacitance_nF: 0 };
    zeros.dimmer.interferenceCapacitance_nF = 0;
    zeros.dimmer.choke = { inductance_mH: 0, resistance_Ohm: 0.2, lossResistance_kOhm: null };
    zeros.dimmer.onVoltage_V = 0;
    zeros.dimmer.turnOffTime_us = 0;
    zeros.addedLoad = { kind: 'resistor-capacitor', resistance_Ohm: 100, capacitance_nF: 0 };
    for (const { lamp } of zeros.lamps) {
      Object.assign(lamp.input, { inductance_mH: 0, inductorLoss_kOhm: null, capacitance_nF: 0 });
      lamp.input.damper.capacitance_nF = 0;
    }
    zeros.lamps[1].lamp.input.bleeder.capacitance_nF = 0;
    zeros.lamps[2].lamp.input.bleeder.current_mA = 0;
    const { pairing, options } = convert(zeros);
    expect([...checkPairing(pairing), ...checkOptions(options)]).toEqual([]);
    expect(pairing.dimmer.snubber).toBeNull();
    expect(pairing.addedLoad).toBeNull();
    expect(pairing.lamps.map(({ lamp }) => lamp.input.damper)).toEqual([null, null, null, null]);
    expect(pairing.lamps.map(({ lamp }) => lamp.input.bleeder?.kind ?? null)).toEqual(['resistor', null, null, null]);
    expect(pairing.dimmer.choke).toEqual({ inductance: 0, resistance: 0.2, lossResistance: null });
    // the section's 1 kOhm stays, in series with the diac
    expect(pairing.dimmer.drive).toMatchObject({ secondSection: null, diacResistance: 1010 });
  });

  it('lets nothing through that the model would refuse, at either end of every range', () => {
    for (const drive of ['diac', 'timed'] as const) {
      for (const leaf of numberLeaves(fullPairing(drive))) {
        for (const value of [leaf.minimum, leaf.maximum]) {
          const changed = fullPairing(drive);
          leaf.set(changed, value);
          const parsed = askedPairing.safeParse(changed);
          // At odds with another field: the rules across fields see to that.
          if (!parsed.success) continue;
          const { pairing, options } = convert(changed);
          expect([leaf.path, value, ...checkPairing(pairing), ...checkOptions(options)]).toEqual([leaf.path, value]);
        }
      }
    }
  });

  it('tells the model which values were assumed, under its names', () => {
    const { options } = question(examplePairing());
    expect(options.assumed?.map(({ path }) => path).sort()).toEqual([
      'dimmer.choke.inductance',
      'dimmer.drive.breakover',
      'dimmer.drive.capacitance',
      'dimmer.drive.fixedResistance',
      'dimmer.drive.gateResistance',
      'dimmer.drive.gateThreshold',
      'dimmer.interferenceCapacitance',
      'dimmer.snubber.capacitance',
      'dimmer.snubber.resistance',
      'dimmer.turnOffTime',
      'lamps[0].lamp.input.inductance',
    ]);
    expect(question(fullPairing('diac')).options.assumed).toEqual([]);
  });

  it('has a wire field for every value that the model can doubt, with its unit at the end', () => {
    const timed = Object.assign(examplePairing(), { addedLoad: null });
    timed.dimmer.drive = { kind: 'timed' };
    timed.lamps = [{ count: 1, lamp: { load: { kind: 'reservoir', capacitance_uF: 4.7, power_W: 5 } } }];
    const wire = [examplePairing(), timed].flatMap((pairing) =>
      completePairing(askedPairing.parse(pairing)).assumptions.map(({ path }) => path),
    );
    for (const path of ASSUMABLE_PATHS) {
      const found = assumedOnWire(path.replace('[]', '[0]'), wire);
      expect([path, found?.path], path).toEqual([path, expect.stringMatching(/_(V|Ohm|kOhm|nF|mH|us|mA|deg)$/)]);
      const [assumed] = assumedInModel([found?.path ?? '']);
      expect(assumed).toEqual({ path: path.replace('[]', '[0]'), range: null });
    }
  });

  it('leaves a lamp known by its class to the thread, and a record with what no record shows', () => {
    const points = Array.from({ length: 9 }, (_, index) => ({ phase_deg: index * 22.5, current_mA: 10 * index }));
    const pairing = Object.assign(examplePairing(), {
      lamps: [
        { count: 2, lamp: { ratedPower_W: 8, powerFactor: 0.5, load: { kind: 'class', class: 'reservoir-driver' } } },
        { count: 1, lamp: { ratedPower_W: 6, load: { kind: 'phase-table', voltage_V: 231, frequency_Hz: 50, points } } },
        {
          count: 1,
          lamp: {
            load: { kind: 'phase-table', voltage_V: 231, frequency_Hz: 50, points, minimumVoltage_V: 60 },
            input: { seriesResistance_Ohm: 33 },
          },
        },
      ],
    });
    const table = { voltage: 231, frequency: 50, points: points.map((p) => ({ phase: p.phase_deg, current: p.current_mA / 1e3 })) };
    expect(question(pairing).pairing.lamps).toEqual([
      { count: 2, known: 'class', of: { lampClass: 'reservoir-driver', power: 8, powerFactor: 0.5, voltage: 230, frequency: 50 } },
      {
        count: 1,
        known: 'record',
        table,
        ground: { seriesResistance: 22, minimumVoltage: 50, ratedPower: 6 },
        seriesRange: [10, 47],
      },
      { count: 1, known: 'record', table, ground: { seriesResistance: 33, minimumVoltage: 60, ratedPower: null }, seriesRange: null },
    ]);
  });

  it('converts the example of the documentation', () => {
    const { pairing, options } = convert(examplePairing());
    expect([...checkPairing(pairing), ...checkOptions(options)]).toEqual([]);
    expect(options.dialPositions).toHaveLength(21);
  });
});
