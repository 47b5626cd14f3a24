/**
 * The engine against an independent circuit simulator on the same circuits: always against its frozen results, and against the program
 * itself, where it is installed, on a dozen that is another one every day (HOLDFAST_DOZEN=3 runs the third instead). Acceptance (compare.ts): where the pattern repeats the same firings in every
 * half-cycle, angles within 0.05 degrees, charge within 0.5 %; where it wanders mean firings within 5 %, silent share within 0.05,
 * mean charge within 3 %.
 */
import { describe, expect, test } from 'vitest';
import { Deviations } from '../support/model-deviations.ts';
import { cases } from './cases.ts';
import { type Comparison, compare, compareFromStart } from './compare.ts';
import { ordinaryTolerances } from './deck.ts';
import { runEngine } from './engine-run.ts';
import { fingerprint, readReference } from './reference.ts';
import { ngspiceVersion, runNgspice } from './run.ts';

/** half-cycles passed over before averages are taken of a run that wanders */
const settle = 40;
/** enough to see the settling too */
const liveHalfCycles = 8;
const { program, cases: frozen } = readReference();
/** circuits run against the program itself, and which of the dozens it is */
const DOZEN = 12;
const dozens = Math.ceil(cases.length / DOZEN);
const day = Math.floor(Date.now() / 86_400_000);
const dozen = Number(process.env.HOLDFAST_DOZEN ?? day) % dozens;
const byName = new Map(frozen.map((entry) => [entry.name, entry]));

function hold({ mismatch, figures }: Comparison, name: string, deviations: Deviations): void {
  expect(mismatch, name).toBeNull();
  for (const { kind, deviation, allowed } of figures) deviations.absolute(kind, name, deviation, 0, allowed);
}

describe(`the engine against frozen results of ${program}`, () => {
  const deviations = new Deviations(`engine against ${program} (frozen)`);

  test('every case has a result, made from the deck as it is now', () => {
    expect(cases.filter((entry) => byName.get(entry.name)?.fingerprint !== fingerprint(entry)).map(({ name }) => name)).toEqual([]);
    expect(new Set(cases.map(({ name }) => name)).size).toBe(cases.length);
    expect(frozen.length).toBe(cases.length);
  });

  test.each(cases)('agrees on $name', (entry) => {
    const reference = byName.get(entry.name);
    if (reference === undefined) throw new Error('no frozen result');
    const run = runEngine(entry.pairing, entry.dial, Math.max(reference.halfCycles, 60));
    hold(compare(run, reference.pattern, entry.pairing, settle), entry.name, deviations);
  });
});

const installed = ngspiceVersion();
const skipped = 'the engine against ngspice itself: skipped, the program ngspice is not installed';

describe.skipIf(installed === null)(
  installed === null ? skipped : `the engine against ${installed} itself, dozen ${dozen} of ${dozens}`,
  () => {
    const deviations = new Deviations(`engine against ${installed} (run now)`);

    test.each(cases.slice(dozen * DOZEN, (dozen + 1) * DOZEN))('agrees from the fresh start on: $name', async (entry) => {
      const { name, pairing, dial, tolerances } = entry;
      const options = { halfCycles: liveHalfCycles, tolerances: { ...ordinaryTolerances, ...tolerances }, timeLimit: 100 };
      const reference = await runNgspice(pairing, dial, options);
      const wanders = byName.get(name)?.pattern.kind === 'wanders';
      hold(compareFromStart(runEngine(pairing, dial, liveHalfCycles), reference, wanders), name, deviations);
    });
  },
);
