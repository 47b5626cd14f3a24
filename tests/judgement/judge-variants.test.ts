import { describe, expect, it } from 'vitest';
import { judgePairing, judgeVariants } from '../../model/index.ts';
import { both } from '../support/model-pairings.ts';
import { ALL_CORNERS, currentAt, resistiveLamp } from './circuits.ts';

const runs = { name: 'early', pairing: resistiveLamp(60, 90, { latchingCurrent: both(currentAt(30)) }) };
const fails = { name: 'late', pairing: resistiveLamp(10, 90, { latchingCurrent: both(currentAt(30)) }) };

function judged(...variants: { name: string; pairing: typeof runs.pairing }[]) {
  const outcome = judgeVariants(variants, 'its input circuit', ALL_CORNERS);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.failure));
  return outcome.value;
}

describe('judging lamps of which only the class is known', () => {
  it('is undetermined where the class spreads over both outcomes, and says which circuits do and what to ask for', () => {
    const { grade, wouldSettle, variants, conditions, summary } = judged(runs, fails);
    expect(grade).toBe('undetermined');
    expect(variants.map((v) => [v.name, v.grade, v.shown])).toEqual([
      ['early', 'suitable', false],
      ['late', 'unsuitable', true],
    ]);
    expect(wouldSettle).toMatchObject({ kind: 'circuit', ask: 'its input circuit' });
    expect(conditions).toEqual([]);
    expect(summary).toContain('steady with early; not with late. Ask the maker for its input circuit.');
  });

  it('has the one grade where every circuit has it, and shows the evidence of the worst', () => {
    const good = judged(runs, { ...runs, name: 'twin' });
    expect(good).toMatchObject({ grade: 'suitable', wouldSettle: null });
    expect(good.variants.map((v) => v.grade)).toEqual(['suitable', 'suitable']);
    const alone = judgePairing(fails.pairing, ALL_CORNERS);
    expect(judged(fails, fails)).toMatchObject({ grade: 'unsuitable', dial: alone.ok ? alone.value.dial : [] });
  });

  it('refuses an empty range', () => {
    expect(judgeVariants([], '', ALL_CORNERS)).toMatchObject({ ok: false, failure: { issues: [{ path: 'variants' }] } });
  });
});
