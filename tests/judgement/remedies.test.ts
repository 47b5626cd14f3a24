import { describe, expect, it } from 'vitest';
import { type AddedLoad, findRemedies, judgePairing, type Pairing, type Remedies, type Remedy } from '../../model/index.ts';
import { cornersOf } from '../../model/judgement/corners.ts';
import { EffortTally } from '../../model/judgement/effort.ts';
import { addedLoadHeat } from '../../model/judgement/remedies/added-load-heat.ts';
import { both, firedAt, idealDimmer, pairing, resistor, stiff } from '../support/model-pairings.ts';
import { ALL_CORNERS, currentAt, dimmer, emulators, NOMINAL, OHMS, PULSE_ANGLE, resistiveLamp, ringing } from './circuits.ts';

function remediesOf(any: Pairing): Remedies {
  const outcome = findRemedies(any, ALL_CORNERS);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.failure));
  return outcome.value;
}

/** the pairing with the remedy put into it, and the dial as it leaves it */
function cured(any: Pairing, remedy: Remedy): { pairing: Pairing; dialPositions: readonly number[] } {
  const dialPositions = ALL_CORNERS.dialPositions;
  switch (remedy.kind) {
    case 'low-end-trim':
      return { pairing: any, dialPositions: dialPositions.filter((p) => p >= remedy.position) };
    case 'added-resistor':
      return { pairing: { ...any, addedLoad: { kind: 'resistor', resistance: remedy.resistance } }, dialPositions };
    case 'bypass': {
      const { resistance, capacitance } = remedy;
      return { pairing: { ...any, addedLoad: { kind: 'resistor-capacitor', resistance, capacitance } }, dialPositions };
    }
    case 'more-lamps': {
      const lamps = any.lamps.map((g, k) => (k === remedy.group ? { ...g, count: g.count + remedy.added } : g));
      return { pairing: { ...any, lamps }, dialPositions };
    }
  }
}

describe('remedies', () => {
  const holdsTooLittle = emulators(2, dimmer(50, 30));

  it.each([
    ['lamps that draw too little to hold', holdsTooLittle],
    ['lamps that ring', ringing(1)],
    ['a lamp whose dial is too late at its low end', resistiveLamp(90, 170, { latchingCurrent: both(currentAt(146)) })],
  ])('cure %s when they are put into the pairing, at every corner', (_, sick) => {
    const { grade, remedies } = remediesOf(sick);
    expect(['conditional', 'unsuitable']).toContain(grade);
    expect(remedies.length).toBeGreaterThan(0);
    for (const remedy of remedies) {
      const { pairing, dialPositions } = cured(sick, remedy);
      const outcome = judgePairing(pairing, { ...ALL_CORNERS, dialPositions });
      expect(outcome.ok && outcome.value.grade).toBe(remedy.grade);
      expect(outcome.ok && (outcome.value.conditions[0]?.position ?? null)).toBe(remedy.lowestDial);
    }
  });

  it('come sorted by watts', () => {
    const powers = remediesOf(holdsTooLittle).remedies.map((r) => r.power);
    expect(powers.length).toBeGreaterThan(1);
    expect(powers).toEqual(powers.toSorted((a, b) => a - b));
  });

  it('offer a raised low end, which costs nothing, where the top of the dial is steady', () => {
    const [first] = remediesOf(resistiveLamp(90, 170, { latchingCurrent: both(currentAt(146)) })).remedies;
    expect(first).toMatchObject({ kind: 'low-end-trim', power: 0, parts: 0, grade: 'suitable' });
  });

  it('choose the largest resistor of the E24 series that the closed form lets latch', () => {
    // without the resistor 0.9 Vp sin(30)/R is short of the cold latching current by a fifth
    const latching = currentAt(30, 0.9) / 1.2 / 0.8;
    const sick = resistiveLamp(30, 90, { latchingCurrent: both(latching) });
    const found = remediesOf(sick).remedies.find((r) => r.kind === 'added-resistor');
    if (found?.kind !== 'added-resistor') throw new Error('no resistor found');
    const drawn = (resistance: number) => currentAt(30, 0.9) * (1 + 5290 / resistance);
    expect(drawn(found.resistance)).toBeGreaterThan(1.2 * latching);
    // 22 kOhm is the next of the series above 20 kOhm
    expect(found.resistance).toBe(20e3);
    expect(drawn(22e3)).toBeLessThan(1.2 * latching);
  });

  it('say on which assumed value they hinge, with the threshold of the closed form', () => {
    const latching = currentAt(30, 0.9) / 1.2 / 0.8;
    const sick = resistiveLamp(30, 90, { latchingCurrent: both(latching) });
    const curedIf = (low: number, high: number) => {
      const assumed = [{ path: 'dimmer.drive.firingAngleFull', range: { low, high } }];
      const outcome = findRemedies(sick, { ...ALL_CORNERS, assumed });
      const found = outcome.ok ? outcome.value.remedies.find((r) => r.kind === 'added-resistor') : undefined;
      if (found?.kind !== 'added-resistor') throw new Error('no resistor found');
      return found;
    };
    const open = curedIf(20, 40);
    expect([open.resistance, open.grade]).toEqual([20e3, 'suitable']);
    // 0.9 Vp sin(alpha) (1/R + 1/20 kOhm) reaches the latching current in the cold from this angle on, less the pulse
    const from = (Math.asin(0.5 / 0.8 / (1 + OHMS / 20e3)) * 180) / Math.PI - PULSE_ANGLE;
    const { threshold, gradeBelow, gradeAbove } = open.hingesOn ?? { threshold: { low: 0, high: 0 } };
    expect(threshold.low).toBeLessThan(from + 0.01);
    expect(threshold.high).toBeGreaterThan(from - 0.01);
    expect([gradeBelow, gradeAbove]).toEqual(['unsuitable', 'suitable']);
    expect(open.detail).toContain('It hinges on the firing angle at full dial, which was assumed (30 deg)');
    expect(curedIf(29.8, 40).hingesOn).toBeNull();
  });

  it('come with the watts to buy: at least twice the heat', () => {
    const resistors = remediesOf(holdsTooLittle).remedies.filter((r) => r.kind === 'added-resistor' || r.kind === 'bypass');
    expect(resistors.length).toBeGreaterThan(0);
    for (const r of resistors) {
      if (r.kind !== 'added-resistor' && r.kind !== 'bypass') continue;
      expect(r.ratedPower).toBeGreaterThanOrEqual(2 * r.power);
      expect(r.detail).toContain(`${r.ratedPower} W`);
      if (r.kind === 'bypass') expect(r.capacitorClass).toBe(275);
    }
  });

  it('are not looked for where the pairing is suitable', () => {
    const { grade, remedies, tried, summary } = remediesOf(emulators(4, dimmer(40, 22)));
    expect([grade, remedies, tried]).toEqual(['suitable', [], []]);
    expect(summary).toContain('needs no remedy');
  });

  it('are not said to be needless without the assumption that this rests on', () => {
    const suits = resistiveLamp(40, 90, { latchingCurrent: both((currentAt(30, 0.9) / 1.2) * 1.0001) });
    const assumed = [{ path: 'dimmer.drive.firingAngleFull', range: { low: 20, high: 60 } }];
    const outcome = findRemedies(suits, { ...ALL_CORNERS, assumed });
    expect(outcome.ok && outcome.value.summary).toMatch(
      /^It needs no remedy with the values as they were assumed: .* It hinges on the firing angle/,
    );
  });

  it('replace the added load that is there, and say so', () => {
    const loaded: Pairing = { ...holdsTooLittle, addedLoad: { kind: 'resistor', resistance: 220e3 } };
    const { remedies } = remediesOf(loaded);
    const loads = remedies.filter((r) => r.kind === 'added-resistor' || r.kind === 'bypass');
    expect(loads.map((r) => r.kind).sort()).toEqual(['added-resistor', 'bypass']);
    for (const { detail } of loads) expect(detail).toContain('in place of the load that is there now');
  });

  it('say so where none is found', () => {
    const ratings = { maximumCurrent: null, maximumPeakCurrent: 1e-3, minimumLoad: null, maximumLoad: null };
    const { remedies, tried, summary } = remediesOf(resistiveLamp(30, 90, { ratings }));
    expect(remedies).toEqual([]);
    expect(tried.map((t) => t.kind)).toEqual(['low-end-trim', 'added-resistor', 'bypass', 'more-lamps']);
    expect(summary).toMatch(/^No remedy was found: .*candidates simulated/);
  });
});

describe('the heat of an added load', () => {
  const heatOf = (load: AddedLoad, angle: number) => {
    const switched = pairing(stiff(230, 50), idealDimmer({ drive: firedAt(angle) }), resistor(500));
    const [corner] = cornersOf(switched, NOMINAL);
    if (corner === undefined) throw new Error('no corner');
    return addedLoadHeat(switched, load, corner, { ...NOMINAL, dialPositions: [0, 100] }, new EffortTally());
  };

  // phase-cut sine into R: P/P0 = 1 - alpha/pi + sin(2 alpha)/(2 pi), exact
  it.each([
    [30, 0.9711655571887814],
    [60, 0.8044988905221148],
    [90, 0.5],
    [120, 0.1955011094778854],
    [150, 0.02883444281121861],
  ])('is V^2/R of the phase-cut sine fired at %d degrees', (angle, share) => {
    const { power, rmsVoltage } = heatOf({ kind: 'resistor', resistance: 10e3 }, angle);
    expect(power / ((230 ** 2 / 10e3) * share)).toBeCloseTo(1, 3);
    expect(rmsVoltage / (230 * Math.sqrt(share))).toBeCloseTo(1, 3);
  });

  it('is that of a capacitor charged and discharged through its resistor, C V^2/2 for each step, where the sine adds little', () => {
    // at 90 degrees: a step of Vp, a quarter sine back to 0: the step alone turns C Vp^2/2 to heat in each half-cycle
    const [resistance, capacitance] = [100, 10e-9];
    const { power, peakVoltage } = heatOf({ kind: 'resistor-capacitor', resistance, capacitance }, 90);
    const steps = 100 * ((capacitance * 2 * 230 ** 2) / 2);
    // the sine's own current: (omega C Vp)^2/2 R over half of the time
    const sine = ((2 * Math.PI * 50 * capacitance) ** 2 * 230 ** 2 * resistance) / 2;
    expect(power / (steps + sine)).toBeCloseTo(1, 2);
    expect(peakVoltage / (230 * Math.SQRT2)).toBeCloseTo(1, 3);
  });
});
