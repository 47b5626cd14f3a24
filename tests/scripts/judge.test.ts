import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { verdict } from '../../server/schemas/verdict.ts';
import { temporaryFolder } from '../support/server-temporary-record.ts';
import { EXAMPLES, runJudge } from './judge-run.ts';

const ESCAPE = '\u001b';

function fileHolding(text: string | Uint8Array): string {
  const path = join(temporaryFolder(), 'pairing.json');
  writeFileSync(path, text);
  return path;
}

const landing = () => readFileSync(`${EXAMPLES}landing.json`, 'utf8');

/** refused: 2, all of it on stderr, where each of these stands */
async function expectRefused(args: readonly string[], ...says: readonly string[]): Promise<void> {
  const run = await runJudge(args);
  expect(run.code).toBe(2);
  expect(run.stdout).toBe('');
  for (const words of says) expect(run.stderr.replace(/\s+/g, ' ')).toContain(words);
}

describe('judging from the command line', () => {
  it('prints the grade first and the sentence after it, and ends with 0 for a bad grade as for a good one', async () => {
    const good = await runJudge([`${EXAMPLES}breakfast-room.json`]);
    expect(good).toMatchObject({ code: 0, stderr: '' });
    expect(good.stdout).toMatch(/^SUITABLE\n5 lamps run steadily on this dimmer over the whole dial\.\n/);

    const bad = await runJudge([`${EXAMPLES}landing.json`]);
    expect(bad).toMatchObject({ code: 0, stderr: '' });
    expect(bad.stdout).toMatch(/^UNSUITABLE\n3 lamps do not run steadily on this dimmer: .*fires up to\n\d+ times/);
  });

  it('prints with --json the whole verdict as the service answers it', async () => {
    const run = await runJudge(['--json', `${EXAMPLES}bedroom.json`]);
    expect(run).toMatchObject({ code: 0, stderr: '' });
    const printed: unknown = JSON.parse(run.stdout);
    const parsed = verdict.parse(printed);
    expect(parsed).toEqual(printed);
    expect(parsed.grade).toBe('conditional');
    expect(parsed.dial).toHaveLength(42);
    expect(parsed.cautions.join(' ')).toMatch(/can kill/);
  });

  it('reads standard input where the file is called -, and says the same as for the file', async () => {
    const [piped, named] = await Promise.all([runJudge(['-'], { stdin: landing() }), runJudge([`${EXAMPLES}landing.json`])]);
    expect(piped).toEqual(named);
    const broken = await runJudge(['-'], { stdin: '{"mains":' });
    expect(broken).toMatchObject({ code: 2, stdout: '' });
    expect(broken.stderr).toContain('standard input is not JSON');
  });

  it('writes no colour into a pipe, with NO_COLOR and without', async () => {
    const [without, withIt] = await Promise.all([
      runJudge([`${EXAMPLES}attic-stairs.json`]),
      runJudge([`${EXAMPLES}attic-stairs.json`], { variables: { NO_COLOR: '1' } }),
    ]);
    expect(without.stdout).not.toContain(ESCAPE);
    expect(withIt.stdout).toBe(without.stdout);
  });

  it('adds remedies, counts and the requirement where they are asked for, and takes the file for the rest', async () => {
    const attic = `${EXAMPLES}attic-stairs.json`;
    const [report, json] = await Promise.all([
      runJudge(['--remedies', '--counts', '1-2', '--requirement', attic]),
      runJudge(['--remedies', '--counts', '1-2', '--requirement', '--json', attic]),
    ]);
    expect([report.code, json.code]).toEqual([0, 0]);
    const { requirement, ...printed } = JSON.parse(json.stdout);
    expect(verdict.parse(printed)).toEqual(printed);
    expect(printed.pairing.options).toMatchObject({ remedies: true, lampCount: { from: 1, to: 2, group: 0 } });
    expect(printed.lampCounts.counts).toHaveLength(2);
    const words = report.stdout.replace(/\s+/g, ' ');
    for (const title of ['Remedies', 'How many lamps', 'What dimmer would do']) expect(report.stdout).toContain(`\n${title}\n`);
    for (const { detail } of printed.remedies.found) expect(words).toContain(detail);
    expect(words).toContain(printed.lampCounts.summary);
    expect(words).toContain(requirement.summary);
  });

  it('explains itself with --help and ends with 0', async () => {
    const run = await runJudge(['--help']);
    expect(run).toMatchObject({ code: 0, stderr: '' });
    expect(run.stdout).toMatch(/^Usage: npm run judge -- \[OPTIONS\] FILE\.json\n/);
  });
});

describe('refusing on the command line', () => {
  it('shows the usage where no file, two files or an unknown option is given', async () => {
    await expectRefused([], 'name the file that holds the pairing', 'Usage: npm run judge');
    await expectRefused(['a.json', 'b.json'], 'one file at a time; these are 2: a.json b.json', 'Usage: npm run judge');
    await expectRefused(['--counts', '3', 'a.json'], '--counts takes two numbers of lamps like 1-12, not 3');
    await expectRefused(['--counts', '5-2', 'a.json'], '--counts 5-2: must be from 5');
    await expectRefused(['--jsn', 'a.json'], "Unknown option '--jsn'", 'Usage: npm run judge');
  });

  it('names a file that is not there, and a folder', async () => {
    const folder = temporaryFolder();
    mkdirSync(join(folder, 'rooms'));
    await expectRefused([join(folder, 'salon.json')], `there is no file ${join(folder, 'salon.json')}`);
    await expectRefused([join(folder, 'rooms')], 'it is a folder; name a file in it');
  });

  it('says at which line and column a file stops being JSON, and what should stand there', async () => {
    const path = fileHolding(landing().replace('"frequency_Hz": 50 }', '"frequency_Hz": 50, }'));
    await expectRefused([path], `${path} is not JSON`, 'line 2, column 52: expected a field name in double quotes', 'found "},"');
  });

  it('refuses an empty file and one that is not UTF-8 in words of their own', async () => {
    await expectRefused([fileHolding('\n')], 'is empty; it should hold a pairing as JSON');
    await expectRefused([fileHolding(new Uint8Array([0xff, 0xfe, 0x7b]))], 'is not text in UTF-8');
  });

  it('lists everything that is wrong with a pairing, each thing by its path and with what would be right', async () => {
    const text = landing()
      .replace('"voltage_V": 230', '"voltage_V": 2300')
      .replace('"count": 3', '"count": 0')
      .replace('holdingCurrent', 'holdingCurent');
    await expectRefused(
      [fileHolding(text)],
      'is not a pairing that can be judged: 4 things are wrong',
      'mains.voltage_V must be a number from 85 to 265 (V)',
      'lamps[0].count must be a whole number from 1 to 500',
      'dimmer.holdingCurent_mA is not a field here; the fields are',
      'dimmer.holdingCurrent_mA is missing',
    );
  });

  it('refuses a recorded lamp that no lamp of the model fits, and says by how much it misses', async () => {
    // a current that comes and goes five times in a half-cycle is no lamp
    const points = Array.from({ length: 181 }, (_, phase_deg) => ({ phase_deg, current_mA: phase_deg % 36 < 18 ? 60 : 5 }));
    const load = { kind: 'phase-table', voltage_V: 230, frequency_Hz: 50, points };
    const asked = { ...JSON.parse(landing()), lamps: [{ count: 1, lamp: { load } }] };
    await expectRefused([fileHolding(JSON.stringify(asked))], 'lamps[0].lamp', 'more than 15.0 %');
  });
});
