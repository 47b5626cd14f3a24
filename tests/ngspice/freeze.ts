/**
 * Runs ngspice on every case whose frozen result is missing or was made from another deck, and writes reference.json in the cases'
 * order. With words as arguments, also on every case whose name contains one of them; with --all, on every case.
 */
import { existsSync, writeFileSync } from 'node:fs';
import { cases } from './cases.ts';
import type { Case } from './circuits.ts';
import { type DeckTolerances, ordinaryTolerances } from './deck.ts';
import { type Pattern, patternOf } from './pattern.ts';
import { type FrozenCase, fingerprint, readReference, referenceFile } from './reference.ts';
import { ngspiceVersion, runNgspice } from './run.ts';

/** half-cycles, the next length where a run has not settled into a pattern; of the longest the first `settle` are not averaged */
const lengths = [24, 48, 240];
const settle = 40;

async function freeze(case_: Case): Promise<FrozenCase> {
  const tolerances: DeckTolerances = { ...ordinaryTolerances, ...case_.tolerances };
  for (const halfCycles of lengths) {
    const run = await runNgspice(case_.pairing, case_.dial, { halfCycles, tolerances, timeLimit: 600 });
    const pattern = patternOf(run, settle);
    if (pattern.kind === 'wanders' && halfCycles !== lengths.at(-1)) continue;
    const dump = run.findLast((halfCycle) => halfCycle.dump !== null)?.dump ?? null;
    const diac = case_.pairing.dimmer.drive.kind === 'diac';
    return {
      name: case_.name,
      fingerprint: fingerprint(case_),
      tolerances,
      halfCycles,
      pattern: rounded(pattern),
      dump: diac && dump !== null ? { from: round(dump.from, 3), to: round(dump.to, 3) } : null,
    };
  }
  throw new Error('unreachable: the longest run always ends in a pattern or its averages');
}

const round = (value: number, digits: number) => Number(value.toFixed(digits));

function rounded(pattern: Pattern): Pattern {
  if (pattern.kind === 'wanders')
    return { ...pattern, firings: round(pattern.firings, 4), silentShare: round(pattern.silentShare, 4), charge: round(pattern.charge, 9) };
  return {
    ...pattern,
    halfCycles: pattern.halfCycles.map(({ firingAngles, charge }) => ({
      firingAngles: firingAngles.map((angle) => round(angle, 4)),
      charge: round(charge, 9),
    })),
  };
}

const program = ngspiceVersion();
if (program === null) throw new Error('ngspice is not installed');
const words = process.argv.slice(2);
const frozen = new Map(existsSync(referenceFile) ? readReference().cases.map((entry) => [entry.name, entry] as const) : []);
for (const [index, case_] of cases.entries()) {
  const current = frozen.get(case_.name)?.fingerprint === fingerprint(case_);
  if (current && !words.includes('--all') && !words.some((word) => case_.name.includes(word))) continue;
  const started = Date.now();
  try {
    const result = await freeze(case_);
    frozen.set(case_.name, result);
    const { pattern } = result;
    const said =
      pattern.kind === 'repeats'
        ? pattern.halfCycles.map(({ firingAngles }) => firingAngles.map((angle) => angle.toFixed(2)).join(' ') || 'silent').join(' / ')
        : `wanders: ${pattern.firings.toFixed(2)} firings`;
    console.log(`${index + 1}/${cases.length} ${case_.name}: ${said} (${((Date.now() - started) / 1000).toFixed(1)} s)`);
  } catch (error) {
    console.error(`${index + 1}/${cases.length} ${case_.name}: FAILED ${String(error).match(/doAnalyses[^\n]*/)?.[0] ?? error}`);
    process.exitCode = 1;
  }
  const kept = cases.flatMap(({ name }) => frozen.get(name) ?? []);
  const made = "by tests/ngspice/freeze.ts; angles in degrees, charges in C, positive in the half-cycle's own polarity";
  writeFileSync(referenceFile, `${JSON.stringify({ program, made, cases: kept }, null, 1)}\n`);
}
