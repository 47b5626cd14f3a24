import { type ChildProcess, spawn } from 'node:child_process';
import { getEventListeners, once } from 'node:events';
import { existsSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import Database from 'better-sqlite3';
import { describe, expect, it, onTestFinished } from 'vitest';
import { durationOf, standingOf, untilNextLook } from '../../scripts/screening-progress.ts';
import { temporaryFolder } from '../support/server-temporary-record.ts';

const ROOT = new URL('../..', import.meta.url).pathname;
const PATIENCE = { timeout: 60_000 };
/** cheap: one dial position at the nominal corner */
const BRIEF = ['--dial', '70', '--corners', 'nominal'];

interface Ended {
  readonly code: number | null;
  readonly output: string;
}

interface Running {
  readonly child: ChildProcess;
  readonly ended: Promise<Ended>;
}

function start(...args: string[]): Running {
  const inherited = Object.entries(process.env).filter(([name]) => !name.startsWith('HOLDFAST_') && name !== 'NODE_OPTIONS');
  const child = spawn(process.execPath, ['--import', 'tsx', 'scripts/screen.ts', ...args], {
    cwd: ROOT,
    env: { ...Object.fromEntries(inherited), HOLDFAST_WORKERS: '1' },
  });
  let output = '';
  for (const stream of [child.stdout, child.stderr]) {
    stream?.on('data', (bytes) => {
      output += bytes;
    });
  }
  const ended = once(child, 'close').then(([code]) => ({ code: code as number | null, output }));
  onTestFinished(async () => {
    child.kill('SIGKILL');
    await ended;
  });
  return { child, ended };
}

interface Lists {
  readonly folder: string;
  readonly out: string;
  readonly args: string[];
}

function lists(lamps: number, dimmers: number): Lists {
  const folder = temporaryFolder();
  const lampRows = Array.from({ length: lamps }, (_, index) => ({
    id: `lamp-${index}`,
    lamp: { ratedPower_W: 25, load: { kind: 'resistive', resistance_Ohm: 600 + index } },
  }));
  const dimmerRows = Array.from({ length: dimmers }, (_, index) => `dimmer-${index};Wall ${index};50;${20 + index}`);
  writeFileSync(join(folder, 'lamps.json'), JSON.stringify(lampRows));
  writeFileSync(join(folder, 'dimmers.csv'), ['id;name;latchingCurrent_mA;holdingCurrent_mA', ...dimmerRows, ''].join('\r\n'));
  const out = join(folder, 'out.csv');
  const args = ['--lamps', join(folder, 'lamps.json'), '--dimmers', join(folder, 'dimmers.csv'), '--out', out, ...BRIEF];
  return { folder, out, args };
}

/** How many pairings a run has written down. */
function doneIn(partial: string): number {
  try {
    const record = new Database(partial, { readonly: true, fileMustExist: true });
    try {
      return record.prepare<[], number>('SELECT done FROM screenings').pluck().get() ?? 0;
    } finally {
      record.close();
    }
  } catch {
    // It is only being made.
    return 0;
  }
}

describe('npm run screen', () => {
  it('judges every lamp with every dimmer, writes the results, and leaves nothing else behind', async () => {
    const { folder, out, args } = lists(2, 2);
    const { code, output } = await start(...args, '--counts', '1,3').ended;
    expect({ code, output }).toEqual({
      code: 0,
      output: expect.stringMatching(/8 pairings of 2 lamps and 2 dimmers: 8 judged, 0 given up/),
    });
    expect(output).toMatch(/\[#{24}\] 100% \| 8 of 8 \| done/);
    const [header, ...lines] = readFileSync(out, 'utf8').trimEnd().split('\r\n');
    expect(header).toBe('lampId,dimmerId,count,outcome,grade,summary,verdictId');
    expect(lines.map((line) => line.split(',').slice(0, 4).join(','))).toEqual(
      ['lamp-0', 'lamp-1'].flatMap((lamp) =>
        ['dimmer-0', 'dimmer-1'].flatMap((dimmer) => [1, 3].map((count) => `${lamp},${dimmer},${count},judged`)),
      ),
    );
    expect(readdirSync(folder).sort()).toEqual(['dimmers.csv', 'lamps.json', 'out.csv']);
  });

  it.each(['SIGINT', 'SIGKILL'] as const)('goes on where %s stopped it, to the same results', async (signal) => {
    const { out, args } = lists(10, 15);
    const first = start(...args);
    await expect.poll(() => doneIn(`${out}.partial`), PATIENCE).toBeGreaterThan(0);
    first.child.kill(signal);
    const interrupted = await first.ended;
    expect(interrupted.code).toBe(signal === 'SIGINT' ? 130 : null);
    if (signal === 'SIGINT') expect(interrupted.output).toMatch(/Interrupted: \d+ of 150 are left\. The same command goes on\./);
    const done = doneIn(`${out}.partial`);
    expect(existsSync(out)).toBe(false);

    const second = await start(...args).ended;
    expect(second).toMatchObject({ code: 0, output: expect.stringContaining(`| ${done} of 150 |`) });
    const undisturbed = lists(10, 15);
    expect((await start(...undisturbed.args).ended).code).toBe(0);
    expect(readFileSync(out, 'utf8')).toBe(readFileSync(undisturbed.out, 'utf8'));
  });

  it('ends with 1 where a pairing was given up, names it, and does the rest', async () => {
    const { folder, args } = lists(1, 2);
    const out = join(folder, 'out.ndjson');
    // A record of no current at all: nothing can be fitted to it.
    const points = Array.from({ length: 36 }, (_, index) => ({ phase_deg: index * 10, current_mA: 0 }));
    const dark = { id: 'dark', lamp: { ratedPower_W: 5, load: { kind: 'phase-table', voltage_V: 230, frequency_Hz: 50, points } } };
    const lamps = join(folder, 'lamps.ndjson');
    writeFileSync(
      lamps,
      `${JSON.stringify(dark)}\n${JSON.stringify({ id: 'fine', lamp: { load: { kind: 'resistive', resistance_Ohm: 600 } } })}\n`,
    );
    const { code, output } = await start(...args, '--lamps', lamps, '--out', out).ended;
    expect({ code, output }).toEqual({ code: 1, output: expect.stringMatching(/given up: 1 x dark on dimmer-0: .+/) });
    const rows = readFileSync(out, 'utf8')
      .trimEnd()
      .split('\n')
      .map((line) => JSON.parse(line));
    expect(rows.map(({ lampId, outcome }) => [lampId, outcome])).toEqual([
      ['dark', 'failed'],
      ['dark', 'failed'],
      ['fine', 'judged'],
      ['fine', 'judged'],
    ]);
    expect(rows[0].failure).toMatchObject({ kind: 'profile-refused', pairing: { lamps: [{ lamp: { load: { kind: 'phase-table' } } }] } });
  });

  it('ends with 2 and the place where a row is wrong, and keeps nothing', async () => {
    const { folder, out, args } = lists(1, 1);
    writeFileSync(join(folder, 'lamps.json'), JSON.stringify([{ id: 'bad', lamp: { load: { kind: 'resistive', resistance_Ohm: -1 } } }]));
    const { code, output } = await start(...args).ended;
    expect({ code, output }).toEqual({
      code: 2,
      output: expect.stringMatching(/lamps\.json, row 1\n {2}lamp\.load\.resistance_Ohm must be/),
    });
    expect(existsSync(`${out}.partial`)).toBe(false);
  });

  it('ends with 2 where what is there is of other lists, and does not touch it', async () => {
    const { folder, out, args } = lists(10, 15);
    const first = start(...args);
    await expect.poll(() => doneIn(`${out}.partial`), PATIENCE).toBeGreaterThan(0);
    first.child.kill('SIGKILL');
    await first.ended;
    writeFileSync(join(folder, 'dimmers.csv'), 'id;latchingCurrent_mA;holdingCurrent_mA\nother;60;35\n');
    const { code, output } = await start(...args).ended;
    expect({ code, output }).toEqual({ code: 2, output: expect.stringContaining('is of other lists or options') });
    expect(doneIn(`${out}.partial`)).toBeGreaterThan(0);
  });

  it('says how it is called where it is called wrong', async () => {
    const { code, output } = await start('--lamps', 'lamps.txt', '--out', 'out.xls', '--mains', '230', '--counts', '4,1').ended;
    expect(code).toBe(2);
    for (const complaint of [
      '--lamps must name a file that ends in .csv, .json or .ndjson',
      '--dimmers must name',
      '--out must name',
      '--mains must be volts and hertz, like 230,50',
      'Usage: npm run screen',
    ]) {
      expect(output).toContain(complaint);
    }
    expect((await start('--help').ended).code).toBe(0);
  });
});

describe('the wait between two looks', () => {
  it('leaves nothing on the signal, and ends at once where it is told to stop', async () => {
    const stop = new AbortController();
    for (let look = 0; look < 3; look += 1) await untilNextLook(1, stop.signal);
    expect(getEventListeners(stop.signal, 'abort')).toHaveLength(0);
    const waiting = untilNextLook(2 ** 30, stop.signal);
    stop.abort();
    await waiting;
    await untilNextLook(2 ** 30, stop.signal);
  });
});

describe('the line beside the bar', () => {
  const SCREENING = {
    state: 'running',
    pause: null,
    waitingFor: null,
    counts: { total: 10, stored: 0, done: 4, failed: 0, toGo: 6 },
    rate_perHour: 12_345,
    estimate: { remaining_s: 3700, endsAt: '', basis: '' },
  } as const;

  it('says the rate and the time left, or why nothing moves', () => {
    const standing = (changes: object) => standingOf({ ...SCREENING, ...changes } as unknown as Parameters<typeof standingOf>[0]);
    expect(standing({})).toBe('12,345 an hour, 1 h 02 min left');
    expect(standing({ rate_perHour: null, estimate: null })).toBe('beginning');
    expect(standing({ counts: { ...SCREENING.counts, failed: 2 } })).toBe('12,345 an hour, 1 h 02 min left, 2 given up');
    expect(standing({ pause: { reason: 'disk-full', detail: 'The disk is full.' } })).toBe('paused: The disk is full.');
    expect(standing({ waitingFor: 'No worker is connected.' })).toBe('No worker is connected.');
    expect(standing({ state: 'finished' })).toBe('done');
  });

  it.each([
    [0.2, '1 s'],
    [59, '59 s'],
    [61, '2 min'],
    [3599, '1 h 00 min'],
    [7501, '2 h 06 min'],
  ])('writes %d s as %s', (seconds, text) => {
    expect(durationOf(seconds)).toBe(text);
  });
});
