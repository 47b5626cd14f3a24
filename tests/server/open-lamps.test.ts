import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { testApp } from '../support/server-app.ts';
import type { Loose } from '../support/server-pairings.ts';

const KITCHEN = JSON.parse(readFileSync(new URL('../../scripts/examples/kitchen.json', import.meta.url), 'utf8'));
const BRIEF = { dialPositions_pct: [30, 60, 100] };

const pairing = (lamp: Loose, options: Loose = BRIEF, count = 4) => ({
  mains: { voltage_V: 230, frequency_Hz: 50 },
  dimmer: { latchingCurrent_mA: 50, holdingCurrent_mA: 30 },
  lamps: [{ count, lamp }],
  options,
});

const classLamp = (name: string, more: Loose = {}) => ({ ratedPower_W: 7, ...more, load: { kind: 'class', class: name } });

async function judged(body: Loose): Promise<Loose> {
  const app = await testApp();
  const answer = await app.post(body);
  expect(answer.statusCode, answer.body).toBe(201);
  return { ...answer.json(), app };
}

describe('a lamp known by its class', () => {
  it('is judged with each circuit of the class, and is undetermined where they differ, with what to ask for', async () => {
    const {
      grade,
      variants,
      lampClasses,
      wouldSettle,
      summary,
      conditions,
      pairing: kept,
    } = await judged(pairing(classLamp('linear-string')));
    expect(grade).toBe('undetermined');
    expect(variants.length).toBeGreaterThan(3);
    expect(new Set(variants.map(({ name }: Loose) => name)).size).toBe(variants.length);
    const [found] = lampClasses;
    expect(found).toMatchObject({ path: 'lamps[0].lamp', class: 'linear-string' });
    expect(found.candidates.map(({ name }: Loose) => name)).toEqual(variants.map(({ name }: Loose) => name));
    for (const { power_W } of found.candidates) expect(Math.abs(power_W / 7 - 1)).toBeLessThan(0.011);
    expect(wouldSettle).toEqual({ kind: 'circuit', ask: found.ask, detail: summary });
    expect(conditions).toEqual([]);
    // as it was asked, not as one of its circuits
    expect(kept.lamps[0].lamp).toEqual({
      ratedPower_W: 7,
      ratedVoltage_V: 230,
      powerFactor: null,
      load: { kind: 'class', class: 'linear-string' },
    });
  });

  it('is narrowed by a stated power factor', async () => {
    const all = await judged(pairing(classLamp('linear-string')));
    const some = await judged(pairing(classLamp('linear-string', { powerFactor: 0.97 })));
    expect(Math.min(...all.lampClasses[0].candidates.map(({ powerFactor }: Loose) => powerFactor))).toBeLessThan(0.9);
    for (const { powerFactor } of some.lampClasses[0].candidates) expect(powerFactor).toBeGreaterThan(0.92);
  });

  it('is one circuit where the class is a filament', async () => {
    const { variants, lampClasses, grade } = await judged(pairing(classLamp('filament', { ratedPower_W: 60 })));
    expect([grade, variants, lampClasses[0].candidates.length]).toEqual(['suitable', [], 1]);
  });

  it('has waveforms, counts and a requirement: those of the circuit that is shown', async () => {
    const options = { ...BRIEF, corners: 'nominal', lampCount: { from: 3, to: 5 } };
    const { id, app, lampCounts, variants, dial } = await judged(pairing(classLamp('reservoir-driver'), options));
    const worst = variants.find(({ shown }: Loose) => shown).name;
    expect(lampCounts).toMatchObject({ circuit: worst, group: 0 });
    expect(lampCounts.counts.map(({ count }: Loose) => count)).toEqual([3, 4, 5]);
    const waves = (await app.get(`/v1/verdicts/${id}/waveforms?dial_pct=60`)).json();
    const peak = Math.max(...waves.columns.dimmerCurrent_mA.map(Math.abs)) / 1000;
    const row = dial.find(({ sweep, position_pct }: Loose) => sweep === 'up' && position_pct === 60);
    expect(peak / row.peakCurrent_A).toBeGreaterThan(0.8);
    expect(peak / row.peakCurrent_A).toBeLessThan(1.01);
    expect((await app.get(`/v1/verdicts/${id}/requirement`)).json()).toMatchObject({ verdictId: id, circuit: worst });
  });

  it('is refused where several of them make too many circuits, with what to do', async () => {
    const lamp = classLamp('reservoir-driver');
    const body = pairing(lamp);
    body.lamps.push({ count: 1, lamp: classLamp('corrected-converter') }, { count: 1, lamp: classLamp('linear-string') });
    const { post } = await testApp();
    const answer = (await post(body)).json();
    expect(answer).toMatchObject({
      status: 422,
      issues: [{ path: 'lamps', message: expect.stringMatching(/at most 36 are judged: give/) }],
    });
  });
});

describe('a lamp given by its recorded current', () => {
  it('is fitted, judged as the fitted lamp, and the fit is shown with its residual', async () => {
    const [{ lamp }] = KITCHEN.lamps;
    const given = { ...lamp, input: { seriesResistance_Ohm: 22 }, load: { ...lamp.load, minimumVoltage_V: 50 } };
    const byRecord = await judged(pairing(given, BRIEF, 2));
    const [fit] = byRecord.fits;
    expect(fit).toMatchObject({ path: 'lamps[0].lamp', form: 'reservoir' });
    expect(fit.residual_pct).toBeLessThan(1);
    // what was given leaves one circuit; the same lamp given by it is judged alike
    expect(byRecord.variants).toEqual([]);
    const byCircuit = await judged(pairing(fit.lamp, BRIEF, 2));
    expect([byRecord.grade, byRecord.dial]).toEqual([byCircuit.grade, byCircuit.dial]);
    expect(byRecord.id).not.toBe(byCircuit.id);
    expect(byRecord.pairing.lamps[0].lamp.load.kind).toBe('phase-table');
    // of what the fit took, only what nobody gave is an assumption
    const own = byRecord.assumptions.filter(({ path }: Loose) => path.startsWith('lamps[0].lamp.')).map(({ path }: Loose) => path);
    expect(own).toEqual(['lamps[0].lamp.ratedVoltage_V', 'lamps[0].lamp.load.power_W']);
  });

  it('is judged with each split of its resistance where the series resistor is not given', async () => {
    const { variants, assumptions } = await judged(pairing(KITCHEN.lamps[0].lamp, BRIEF, 2));
    expect(variants.map(({ name }: Loose) => name)).toEqual([
      expect.stringMatching(/^22 Ohm before/),
      expect.stringMatching(/^10 Ohm before/),
      expect.stringMatching(/^25\.\d Ohm before/),
    ]);
    expect(assumptions).toContainEqual({
      path: 'lamps[0].lamp.input.seriesResistance_Ohm',
      value: 22,
      basis: expect.stringMatching(/only the sum with the surge resistance/),
    });
  });
});

describe('remedies that were asked for', () => {
  it('are told with their values and their cost, cheapest first, and the pairing as changed gets the grade that was told', async () => {
    const lamp = { ratedPower_W: 6, load: { kind: 'reservoir', capacitance_uF: 4.7, power_W: 6 } };
    const options = { ...BRIEF, remedies: true };
    const { remedies, grade, pairing: asked } = await judged(pairing(lamp, options, 2));
    expect(grade).toBe('unsuitable');
    expect(remedies.circuit).toBeNull();
    const resistor = remedies.found.find(({ kind }: Loose) => kind === 'added-resistor');
    expect(resistor.ratedPower_W).toBeGreaterThanOrEqual(2 * resistor.power_W);
    const costs = remedies.found.map(({ power_W }: Loose) => power_W);
    expect(costs).toEqual([...costs].sort((a: number, b: number) => a - b));
    const cured = await judged({
      ...asked,
      addedLoad: { kind: 'resistor', resistance_kOhm: resistor.resistance_kOhm },
      options: { ...asked.options, remedies: false },
    });
    expect(cured.grade).toBe(resistor.grade);
  });

  it('say on what they hinge, as the pairing with them does when it is asked about', async () => {
    const lamp = { ratedPower_W: 6, load: { kind: 'reservoir', capacitance_uF: 4.7, power_W: 6 } };
    const { remedies } = await judged(pairing(lamp, { ...BRIEF, remedies: true }, 2));
    const resistor = remedies.found.find(({ kind }: Loose) => kind === 'added-resistor');
    expect(resistor.hingesOn).toMatchObject({ path: expect.stringMatching(/_[A-Za-z]+$/), gradeBelow: expect.any(String) });
    const cured = await judged({
      ...pairing(lamp, BRIEF, 2),
      addedLoad: { kind: 'resistor', resistance_kOhm: resistor.resistance_kOhm },
    });
    expect([cured.grade, cured.wouldSettle]).toEqual(['undetermined', resistor.hingesOn]);
    expect(resistor.detail).toContain(cured.wouldSettle.detail);
  });
});
