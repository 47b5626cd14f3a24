import { describe, expect, it } from 'vitest';
import { COLD_FACTOR } from '../../model/index.ts';
import { BRIDGE_DROP, DROPPER_DISCHARGE, LINE_LEAKAGE } from '../../model/tolerances.ts';
import { askedPairing, judgedPairing } from '../../server/schemas/pairing.ts';
import { canonicalJson, fingerprintOf, verdictIdOf } from '../../server/verdicts/canonical-inputs.ts';
import { MODEL_ASSUMPTIONS } from '../../server/verdicts/model-assumptions.ts';
import { completePairing } from '../../server/verdicts/pairing-completion.ts';
import { briefPairing, examplePairing, fullPairing, type Loose } from '../support/server-pairings.ts';

function complete(pairing: Loose) {
  return completePairing(askedPairing.parse(pairing));
}

function with120V(pairing: Loose): Loose {
  return Object.assign(pairing, { mains: { voltage_V: 120, frequency_Hz: 60 } });
}

const reservoir = (pairing: Loose): Loose => {
  pairing.lamps[0].lamp = { load: { kind: 'reservoir', capacitance_uF: 4.7, power_W: 5 } };
  return pairing;
};

describe('completing a pairing', () => {
  it.each([
    ['the example', examplePairing()],
    ['a filament lamp', briefPairing()],
    ['a reservoir lamp', reservoir(examplePairing())],
    ['a lamp at 120 V', with120V(examplePairing())],
    [
      'an inductor without a stated loss',
      Object.assign(examplePairing(), { lamps: [{ count: 1, lamp: { ...examplePairing().lamps[0].lamp, input: { inductance_mH: 3 } } }] }),
    ],
    ['a full diac dimmer', fullPairing('diac')],
    ['a full timed dimmer', fullPairing('timed')],
  ])('leaves nothing open in %s, and completing it again changes and assumes nothing', (_, pairing) => {
    const once = complete(pairing);
    expect(judgedPairing.parse(once.pairing)).toEqual(once.pairing);
    const twice = complete(once.pairing);
    expect(twice.pairing).toEqual(once.pairing);
    expect(twice.assumptions).toEqual([]);
  });

  it('keeps everything that was given as it was given', () => {
    for (const drive of ['diac', 'timed'] as const) {
      const { pairing, assumptions } = complete(fullPairing(drive));
      expect(pairing).toEqual(fullPairing(drive));
      expect(assumptions).toEqual([]);
    }
  });

  it('lists each value it fills in, at the path where it then stands', () => {
    const { pairing, assumptions } = complete(briefPairing());
    for (const { path, value } of assumptions) {
      const found = path.split(/[.[\]]+/).reduce<Loose>((part, key) => (part === undefined ? undefined : part[key]), pairing);
      expect([path, found]).toEqual([path, value]);
    }
    expect(assumptions.map(({ path }) => path)).toEqual(
      expect.arrayContaining([
        'mains.sourceResistance_Ohm',
        'dimmer.turnOffTime_us',
        'dimmer.choke.inductance_mH',
        'dimmer.snubber.capacitance_nF',
        'dimmer.ratings.maximumLoad_W',
        'dimmer.drive.kind',
        'dimmer.drive.breakover_V',
        'dimmer.drive.secondSection',
        'lamps[0].lamp.ratedVoltage_V',
        'lamps[0].lamp.load.resistance_Ohm',
        'lamps[0].lamp.input.bleeder',
        'options.corners',
      ]),
    );
  });

  it('takes the generic values of the supply that is nearer', () => {
    const values = (pairing: Loose) => {
      const { drive } = complete(pairing).pairing.dimmer;
      return drive.kind === 'diac' ? [drive.fixedResistance_kOhm, drive.potentiometer_kOhm] : [];
    };
    expect(values(examplePairing())).toEqual([22, 330]);
    expect(values(with120V(examplePairing()))).toEqual([10, 150]);
  });

  it('takes an input that suits the kind of load', () => {
    const input = (pairing: Loose) => {
      const lamp = complete(pairing).pairing.lamps[0]?.lamp;
      return lamp !== undefined && 'input' in lamp ? lamp.input : undefined;
    };
    const withoutInput = examplePairing();
    delete withoutInput.lamps[0].lamp.input;
    expect(input(withoutInput)).toMatchObject({ seriesResistance_Ohm: 22, capacitance_nF: 47, inductance_mH: 0, inductorLoss_kOhm: null });
    expect(input(with120V(withoutInput))).toMatchObject({ capacitance_nF: 100 });
    expect(input(reservoir(examplePairing()))).toMatchObject({ seriesResistance_Ohm: 22, capacitance_nF: 22 });
    expect(input(briefPairing())).toMatchObject({ seriesResistance_Ohm: 0.1, capacitance_nF: 0 });
  });

  it('works a filament out of its rating, at the mains voltage unless it is rated otherwise', () => {
    const load = (changes: object) => {
      const pairing = briefPairing();
      Object.assign(pairing.lamps[0].lamp, changes);
      return complete(pairing).pairing.lamps[0]?.lamp.load;
    };
    expect(load({})).toEqual({ kind: 'resistive', resistance_Ohm: 230 ** 2 / 60 });
    expect(load({ ratedVoltage_V: 240 })).toEqual({ kind: 'resistive', resistance_Ohm: 240 ** 2 / 60 });
    expect(load({ load: { kind: 'resistive', resistance_Ohm: 900 } })).toEqual({ kind: 'resistive', resistance_Ohm: 900 });
  });

  it('writes what means the same the same', () => {
    const current = (latchingCurrent_mA: unknown) => {
      const pairing = examplePairing();
      pairing.dimmer.latchingCurrent_mA = latchingCurrent_mA;
      return complete(pairing).pairing.dimmer.latchingCurrent_mA;
    };
    expect(current({ positive: 60, negative: 60 })).toBe(60);
    expect(current({ typical: 60, maximum: 60 })).toBe(60);
    expect(current({ positive: { typical: 60, maximum: 60 }, negative: 60 })).toBe(60);
    expect(current({ positive: { typical: 50, maximum: 60 }, negative: { typical: 50, maximum: 60 } })).toEqual({
      typical: 50,
      maximum: 60,
    });
    expect(current({ positive: 60, negative: 61 })).toEqual({ positive: 60, negative: 61 });
  });

  it('takes a snubber of null for none, and an absent one for the generic one', () => {
    const pairing = examplePairing();
    pairing.dimmer.snubber = null;
    const without = complete(pairing);
    expect(without.pairing.dimmer.snubber).toBeNull();
    expect(without.assumptions.map(({ path }) => path).filter((path) => path.startsWith('dimmer.snubber'))).toEqual([]);
    expect(complete(examplePairing()).pairing.dimmer.snubber).toEqual({ resistance_Ohm: 100, capacitance_nF: 33 });
  });

  it('fills in of a recorded lamp what no record shows, and of a lamp known by its class its rated voltage', () => {
    const points = Array.from({ length: 360 }, (_, phase_deg) => ({ phase_deg, current_mA: 1 }));
    const pairing = Object.assign(examplePairing(), {
      lamps: [
        { count: 1, lamp: { load: { kind: 'phase-table', voltage_V: 230, frequency_Hz: 50, points } } },
        { count: 1, lamp: { ratedPower_W: 8, load: { kind: 'class', class: 'linear-string' } } },
      ],
    });
    const { pairing: judged, assumptions } = complete(pairing);
    expect(judged.lamps[0]?.lamp).toMatchObject({ load: { minimumVoltage_V: 50, points }, input: { seriesResistance_Ohm: 22 } });
    expect(judged.lamps[1]?.lamp).toEqual({
      ratedPower_W: 8,
      ratedVoltage_V: 230,
      powerFactor: null,
      load: { kind: 'class', class: 'linear-string' },
    });
    expect(assumptions.map(({ path }) => path).filter((path) => path.startsWith('lamps'))).toEqual([
      'lamps[0].lamp.ratedPower_W',
      'lamps[0].lamp.ratedVoltage_V',
      'lamps[0].lamp.load.minimumVoltage_V',
      'lamps[0].lamp.input.seriesResistance_Ohm',
      'lamps[1].lamp.ratedVoltage_V',
      'lamps[1].lamp.powerFactor',
    ]);
    expect(judgedPairing.parse(judged)).toEqual(judged);
    expect(complete(judged)).toEqual({ pairing: judged, assumptions: [] });
  });

  it("takes the supply's band from its standard, and counts from the first group", () => {
    const { pairing, assumptions } = complete(Object.assign(examplePairing(), { options: { lampCount: { from: 1, to: 4 } } }));
    expect(pairing.options).toMatchObject({
      supplyBand: { low_pct: 90, high_pct: 110 },
      lampCount: { from: 1, to: 4, group: 0 },
      remedies: false,
    });
    expect(assumptions).toContainEqual({ path: 'options.supplyBand.low_pct', value: 90, basis: expect.stringContaining('EN 50160') });
    expect(assumptions.filter(({ path }) => /lampCount|remedies/.test(path))).toEqual([]);
  });
});

describe('what the model takes for granted', () => {
  it('is listed with the values that the model holds', () => {
    const value = (path: string) => MODEL_ASSUMPTIONS.find((assumption) => assumption.path === path)?.value;
    expect(value('model.bridgeDrop_V')).toBe(BRIDGE_DROP);
    expect(value('model.lineLeakage_MOhm')).toBe(LINE_LEAKAGE / 1e6);
    expect(value('model.dropperDischarge_MOhm')).toBe(DROPPER_DISCHARGE / 1e6);
    expect(value('model.coldFactor')).toBe(COLD_FACTOR);
  });
});

describe('the fingerprint of a question', () => {
  it('does not depend on the order of fields, but on every value and on the model version', () => {
    const asked = complete(examplePairing());
    const shuffled = { ...asked, pairing: Object.fromEntries(Object.entries(asked.pairing).reverse()) as typeof asked.pairing };
    const other = complete(Object.assign(examplePairing(), { options: { corners: 'nominal' } }));
    expect(fingerprintOf(shuffled, '1')).toBe(fingerprintOf(asked, '1'));
    expect(fingerprintOf(asked, '2')).not.toBe(fingerprintOf(asked, '1'));
    expect(fingerprintOf(other, '1')).not.toBe(fingerprintOf(asked, '1'));
    expect(verdictIdOf(fingerprintOf(asked, '1'))).toMatch(/^[0-9a-f]{26}$/);
  });

  it('depends on what was assumed: a value that was given is another question than the same value filled in', () => {
    const assumed = complete(examplePairing());
    const given = complete(Object.assign(examplePairing(), { addedLoad: null, options: { dropOutAngle_deg: 30 } }));
    expect(given.pairing).toEqual(assumed.pairing);
    expect(fingerprintOf(given, '1')).not.toBe(fingerprintOf(assumed, '1'));
    // neither the order in which things were assumed nor the words that say why counts
    const reworded = assumed.assumptions.map((assumption) => ({ ...assumption, basis: 'otherwise' })).reverse();
    expect(fingerprintOf({ ...assumed, assumptions: reworded }, '1')).toBe(fingerprintOf(assumed, '1'));
  });

  it('rests on JSON with sorted keys, lists in their order, and no negative zero', () => {
    expect(canonicalJson({ b: [2, 1], a: { d: -0, c: null } })).toBe('{"a":{"c":null,"d":0},"b":[2,1]}');
  });
});
