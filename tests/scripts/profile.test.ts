import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { readFileSync } from 'node:fs';
import { text } from 'node:stream/consumers';
import { describe, expect, it } from 'vitest';
import { EXAMPLE_PROFILE, profile } from '../../server/schemas/profile.ts';
import { ROOT } from './judge-run.ts';

const KITCHEN = 'scripts/examples/records/kitchen.csv';
const CSV = readFileSync(ROOT + KITCHEN, 'utf8');

async function run(args: readonly string[], stdin = '') {
  const child = spawn(process.execPath, ['--import', 'tsx', 'scripts/profile.ts', ...args], { cwd: ROOT });
  child.stdin.end(stdin);
  const [stdout, stderr, [code]] = await Promise.all([text(child.stdout), text(child.stderr), once(child, 'exit')]);
  return { code, stdout, stderr };
}

describe('fitting a profile from the command line', () => {
  it('prints form, residual, figures, what was taken out and what does not come from the record, and the lamp as JSON', async () => {
    const { code, stdout, stderr } = await run(['--rated-power', '6', KITCHEN]);
    expect([code, stderr]).toEqual([0, '']);
    expect(stdout).toMatch(/^fitted as reservoir: 4\.7 uF/);
    for (const words of ['Recorded', 'Fitted', 'Taken out', 'the current turned round', 'Not from the record'])
      expect(stdout).toContain(words);
    const lamp = JSON.parse(stdout.slice(stdout.indexOf('\n{')));
    expect(lamp).toMatchObject({ ratedPower_W: 6, load: { kind: 'reservoir' } });
  });

  it('prints the whole answer as the service gives it, from a phase table on standard input', async () => {
    const { code, stdout } = await run(['--json', '-'], JSON.stringify(EXAMPLE_PROFILE));
    expect(code).toBe(0);
    const printed: unknown = JSON.parse(stdout);
    expect(profile.parse(printed)).toEqual(printed);
  });

  it('takes units and columns that a CSV does not name', async () => {
    const bare = CSV.slice(CSV.indexOf('\n') + 1);
    const refused = await run(['-'], bare);
    expect([refused.code, refused.stdout]).toEqual([2, '']);
    expect(refused.stderr).toMatch(/unit of the time column is not known/);
    expect((await run(['--units', 'ms,V,mA', '--columns', '0,1,2', '-'], bare)).code).toBe(0);
  });

  it('ends with 2 and the reason where no lamp fits or the file cannot be read', async () => {
    const wrong = await run(['--rated-power', '6', '-'], CSV.replace('current_mA', 'current_A'));
    expect([wrong.code, wrong.stdout]).toEqual([2, '']);
    expect(wrong.stderr.replace(/\s+/g, ' ')).toMatch(/^profile: no lamp was fitted .*amperes where milliamperes were meant/);
    expect(await run(['nowhere.csv'])).toMatchObject({ code: 2, stderr: expect.stringContaining('there is no file') });
    expect(await run(['--rated-power', 'six', KITCHEN])).toMatchObject({
      code: 2,
      stderr: expect.stringContaining('ratedPower_W must be a number'),
    });
    expect(await run([])).toMatchObject({ code: 2, stderr: expect.stringContaining('Usage: npm run profile') });
    expect(await run(['-'], '{"points": [}')).toMatchObject({ code: 2, stderr: expect.stringContaining('line 1, column 13') });
  });
});
