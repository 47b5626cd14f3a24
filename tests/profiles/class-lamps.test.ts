/** A class of lamps as a few circuits: each draws the rated power, a power factor narrows the range, what cannot be is refused. */
import { describe, expect, test } from 'vitest';
import { type ClassLamp, lampsOfClass } from '../../model/profiles/class-lamps.ts';
import type { LampClass } from '../../model/profiles/lamp-class.ts';
import { runUndimmed } from '../../model/profiles/undimmed-lamp.ts';

const supplies = [
  { voltage: 230, frequency: 50 },
  { voltage: 120, frequency: 60 },
];
const classes: readonly LampClass[] = ['reservoir-driver', 'corrected-converter', 'linear-string', 'series-capacitor-dropper', 'filament'];

function asked(lampClass: LampClass, change: Partial<ClassLamp> = {}): ClassLamp {
  return { lampClass, power: 8, powerFactor: null, voltage: 230, frequency: 50, ...change };
}

function spanned(lamp: ClassLamp) {
  const found = lampsOfClass(lamp);
  if (!found.ok) throw new Error(found.failure.detail);
  return found.value;
}

function refusal(lamp: ClassLamp) {
  const found = lampsOfClass(lamp);
  return found.ok ? { kind: 'spanned' } : found.failure;
}

/** W, from the current at every quarter degree: not the sum that the candidates were scaled by */
function undimmedPower(lamp: ClassLamp, candidate: { readonly lamp: Parameters<typeof runUndimmed>[0] }): number {
  const run = runUndimmed(candidate.lamp, lamp);
  if (run === null) throw new Error('does not run');
  let power = 0;
  for (let phase = 0.125; phase < 360; phase += 0.25) {
    power += (run.currentAt(phase) * lamp.voltage * Math.SQRT2 * Math.sin((phase * Math.PI) / 180)) / 1440;
  }
  return power;
}

describe.each(classes)('the class %s', (lampClass) => {
  test.each(supplies)('is spanned at $voltage V by circuits that draw the rated power undimmed', (supply) => {
    for (const power of [3, 8, 25]) {
      const lamp = asked(lampClass, { ...supply, power });
      const { candidates } = spanned(lamp);
      expect(candidates.length).toBeLessThanOrEqual(6);
      if (lampClass !== 'filament') expect(candidates.length).toBeGreaterThanOrEqual(3);
      for (const candidate of candidates) {
        expect(Math.abs(undimmedPower(lamp, candidate) / power - 1)).toBeLessThan(0.03);
        expect(candidate.lamp.ratedPower).toBe(power);
      }
    }
  });

  test('says what it spans, what to ask for, and what each circuit stands for', () => {
    const { spans, ask, candidates } = spanned(asked(lampClass));
    for (const text of [spans, ask, ...candidates.flatMap((c) => [c.name, c.basis])]) expect(text.length).toBeGreaterThan(10);
    expect(new Set(candidates.map((c) => JSON.stringify(c.lamp))).size).toBe(candidates.length);
  });
});

describe('a stated power factor', () => {
  test.each([
    ['reservoir-driver', 0.4],
    ['reservoir-driver', 0.55],
    ['corrected-converter', 0.95],
    ['linear-string', 0.75],
  ] as const)('narrows the class %s to circuits near %d', (lampClass, powerFactor) => {
    const all = spanned(asked(lampClass)).candidates.map((c) => c.powerFactor);
    const { candidates } = spanned(asked(lampClass, { powerFactor }));
    expect(candidates.length).toBeGreaterThan(0);
    for (const candidate of candidates) {
      expect(candidate.powerFactor).toBeGreaterThanOrEqual(powerFactor - 0.05);
      expect(candidate.powerFactor).toBeLessThanOrEqual(powerFactor + 0.1);
    }
    // the class alone holds circuits that the power factor rules out
    expect(all.some((p) => p < powerFactor - 0.05 || p > powerFactor + 0.1)).toBe(lampClass !== 'corrected-converter');
  });

  test('of 0.9 rules a reservoir driver out and says what the class has', () => {
    const failure = refusal(asked('reservoir-driver', { powerFactor: 0.9 }));
    expect(failure).toMatchObject({ kind: 'class-does-not-fit', lampClass: 'reservoir-driver' });
    if (!('range' in failure)) throw new Error('no range');
    expect(failure.range[0]).toBeGreaterThan(0.3);
    expect(failure.range[1]).toBeLessThan(0.7);
  });

  test('of 0.5 rules a filament out', () => {
    expect(refusal(asked('filament', { powerFactor: 0.5 })).kind).toBe('class-does-not-fit');
  });
});

test('a rating that cannot be worked with is named', () => {
  const failure = refusal(asked('filament', { power: 0, powerFactor: 1.2 }));
  expect(failure).toMatchObject({ kind: 'invalid-profile', issues: [{ path: 'power' }, { path: 'powerFactor' }] });
});

test('the same class gives the same bits twice', () => {
  expect(JSON.stringify(spanned(asked('reservoir-driver')))).toBe(JSON.stringify(spanned(asked('reservoir-driver'))));
});
