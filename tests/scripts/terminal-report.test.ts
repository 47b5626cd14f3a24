import { readdirSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { dialStrip } from '../../scripts/dial-strip.ts';
import { judgeInProcess } from '../../scripts/in-process-judging.ts';
import { readPairing } from '../../scripts/pairing-reading.ts';
import { terminalReport } from '../../scripts/terminal-report.ts';
import { COLUMNS, painted, plain, wantsColour, wrap } from '../../scripts/terminal-text.ts';
import type { AskedPairing } from '../../server/schemas/pairing.ts';
import type { Verdict } from '../../server/schemas/verdict.ts';
import { EXAMPLES } from './judge-run.ts';

async function judged(name: string, change: (asked: AskedPairing) => AskedPairing = (asked) => asked): Promise<Verdict> {
  const reading = readPairing(`${EXAMPLES}${name}.json`);
  if (!reading.ok) throw new Error(reading.complaint.join('\n'));
  const judging = await judgeInProcess(change(reading.pairing), new Date('2026-12-01T08:00:00.000Z'));
  if (!judging.ok) throw new Error(judging.complaint.join('\n'));
  return judging.verdict;
}

const statesOf = (verdict: Verdict): ReadonlySet<string> => new Set(verdict.dial.map((row) => row.state));

describe('the example pairings of the guest house', () => {
  it('are these eight, and each does what the README says of it', async () => {
    expect(
      readdirSync(EXAMPLES)
        .filter((name) => name.endsWith('.json'))
        .sort(),
    ).toEqual([
      'attic-stairs.json',
      'bedroom.json',
      'breakfast-room.json',
      'dining-room.json',
      'entrance-hall.json',
      'kitchen.json',
      'landing.json',
      'study.json',
    ]);

    const breakfastRoom = await judged('breakfast-room');
    expect(breakfastRoom.grade).toBe('suitable');
    expect([...statesOf(breakfastRoom)]).toEqual(['steady']);

    const bedroom = await judged('bedroom');
    expect(bedroom.grade).toBe('conditional');
    expect(bedroom.conditions).toHaveLength(1);

    const landing = await judged('landing');
    expect(landing.grade).toBe('unsuitable');
    expect(landing.dial.filter((row) => row.state === 're-firing').length).toBeGreaterThan(10);
    expect(Math.max(...landing.dial.map((row) => row.firings.max))).toBeGreaterThan(2);

    const atticStairs = await judged('attic-stairs');
    expect(atticStairs.grade).toBe('unsuitable');
    expect([...statesOf(atticStairs)]).toEqual(['dark']);
  });

  it('show what would settle a grade: a value to measure in the study, a circuit to ask for in the dining room', async () => {
    const study = await judged('study');
    expect(study.grade).toBe('undetermined');
    expect(study.wouldSettle).toMatchObject({ kind: 'value', path: 'lamps[0].lamp.input.capacitance_nF', assumed: 47 });
    // the same lamps with the value measured, on either side of the threshold
    const threshold = study.wouldSettle?.kind === 'value' ? study.wouldSettle.threshold : { low: 0, high: 0 };
    const measured = async (capacitance_nF: number) => {
      const verdict = await judged('study', (asked) => ({
        ...asked,
        lamps: asked.lamps.map(({ count, lamp }) => ({ count, lamp: { ...lamp, input: { capacitance_nF } } })),
        options: { corners: 'all' },
      }));
      return verdict.corners.some(({ grade }) => grade === 'unsuitable');
    };
    expect([await measured(threshold.low), await measured(threshold.high)]).toEqual([false, true]);

    const diningRoom = await judged('dining-room');
    expect(diningRoom.grade).toBe('undetermined');
    expect(diningRoom.wouldSettle?.kind).toBe('circuit');
    expect(new Set(diningRoom.variants.map(({ grade }) => grade))).toContain('unsuitable');
    expect(diningRoom.variants.filter(({ shown }) => shown)).toHaveLength(1);
    expect(diningRoom.lampClasses[0]?.candidates.map(({ name }) => name)).toEqual(diningRoom.variants.map(({ name }) => name));
  });

  it('show the lamp that was fitted to a record, with its residual, and judge it with what no record tells', async () => {
    const kitchen = await judged('kitchen');
    expect(kitchen.grade).toBe('suitable');
    const [fit] = kitchen.fits;
    expect(fit).toMatchObject({ path: 'lamps[0].lamp', form: 'reservoir', lamp: { load: { kind: 'reservoir' } } });
    expect(fit?.residual_pct).toBeLessThan(1);
    expect(kitchen.variants.length).toBeGreaterThan(1);
    expect(kitchen.assumptions).toContainEqual({ path: 'lamps[0].lamp.load.power_W', value: 'constant', basis: expect.any(String) });
    const report = terminalReport(kitchen, plain).replace(/\s+/g, ' ');
    expect(report).toMatch(/fitted as reservoir: 4\.7 uF, 26\.\d Ohm, [56]\.?\d* W, 22 nF across the input, residual 0\.\d+ %/);
  });

  it('show a mixed circuit that its filament lamp keeps steady: without it the same lamps re-fire', async () => {
    const hall = await judged('entrance-hall');
    expect(hall.pairing.lamps.map(({ lamp }) => lamp.load.kind)).toEqual(['iv-table', 'reservoir', 'resistive']);
    expect(hall.grade).toBe('suitable');
    const without = await judged('entrance-hall', (asked) => ({ ...asked, lamps: asked.lamps.slice(0, 2) }));
    expect(without.grade).toBe('unsuitable');
    expect(statesOf(without)).toContain('re-firing');
  });
});

describe('the report for a terminal', () => {
  it('keeps every line within 80 columns, also for 101 dial positions', async () => {
    const fine = { options: { dialPositions_pct: Array.from({ length: 101 }, (_, position) => position) } };
    const verdicts = [
      await judged('landing'),
      await judged('entrance-hall'),
      await judged('dining-room'),
      await judged('study'),
      await judged('landing', (asked) => ({ ...asked, options: { remedies: true, lampCount: { from: 1, to: 3 } } })),
      await judged('breakfast-room', (asked) => ({ ...asked, ...fine })),
    ];
    for (const verdict of verdicts) {
      for (const line of terminalReport(verdict, plain).split('\n')) expect(line.length, line).toBeLessThanOrEqual(COLUMNS);
    }
  });

  it('says the same with colour and without: the colour only repeats it', async () => {
    const verdict = await judged('bedroom');
    const coloured = terminalReport(verdict, painted);
    // biome-ignore lint/suspicious/noControlCharactersInRegex: the escape that starts a colour
    const bare = coloured.replaceAll(/\u001b\[\d+m/g, '');
    expect(coloured).not.toBe(bare);
    expect(bare).toBe(terminalReport(verdict, plain));
  });

  it('holds every reason, condition, assumption and caution of the verdict', async () => {
    const verdict = await judged('bedroom');
    const words = terminalReport(verdict, plain).replace(/\s+/g, ' ');
    for (const { detail } of [...verdict.reasons, ...verdict.conditions]) expect(words).toContain(detail);
    for (const caution of verdict.cautions) expect(words).toContain(caution);
    for (const { path } of verdict.assumptions) expect(words).toContain(path.slice(path.lastIndexOf('.') + 1));
  });

  it('says beside the dial whose circuit it is where the lamps may have several, and beside counts what was assumed', async () => {
    const several = await judged('dining-room');
    const shown = several.variants.find((variant) => variant.shown)?.name;
    const words = (verdict: Verdict) => terminalReport(verdict, plain).replace(/\s+/g, ' ');
    expect(words(several)).not.toContain('The dial here is');
    expect(words(several)).toContain(`The lamps here have the circuit that does worst: ${shown}.`);
    const study = await judged('study', (asked) => ({
      ...asked,
      options: { lampCount: { from: 2, to: 2 }, dialPositions_pct: [0, 20, 40, 60, 80, 100] },
    }));
    expect(study.wouldSettle?.kind).toBe('value');
    expect(words(study)).toContain("With the lamp's input capacitor as it was assumed.");
    const bedroom = words(await judged('bedroom'));
    expect(bedroom).not.toContain('as it was assumed');
    expect(bedroom).not.toContain('does worst');
    expect(bedroom).toContain('The dial here is the one at 230 V; it is worse at low-mains-cold, see Corners.');
  });

  it('never says that a part may differ by 0 %', async () => {
    const verdict = await judged('bedroom');
    const [row] = verdict.dial;
    if (row === undefined) throw new Error('the bedroom has a dial');
    const near = (least: number): string => {
      const margins = { latching_pct: least, holding_pct: 5, breakover_pct: null };
      return terminalReport({ ...verdict, dial: [{ ...row, nearEdge: true, margins: { ...row.margins, ...margins } }] }, plain).replace(
        /\s+/g,
        ' ',
      );
    };
    expect(near(0)).toContain('Near the edge at 0 %: the slightest difference in a part would do something else there.');
    expect(near(0.0004)).toContain('the slightest difference');
    expect(near(0.42)).toContain('a part 0.42 % different would');
  });

  it('is in colour only in a terminal that is not dumb, and never where NO_COLOR is set', () => {
    expect(wantsColour(true, {})).toBe(true);
    expect(wantsColour(true, { NO_COLOR: '' })).toBe(true);
    expect(wantsColour(true, { NO_COLOR: '1' })).toBe(false);
    expect(wantsColour(true, { TERM: 'dumb' })).toBe(false);
    expect(wantsColour(false, {})).toBe(false);
  });

  it('wraps under its first word and keeps a number with its percent sign', () => {
    const lines = wrap(`${'ab '.repeat(23)}up to 72 % of it`, '  - ');
    expect(lines.every((line) => line.length <= COLUMNS)).toBe(true);
    expect(lines.slice(1).every((line) => line.startsWith('    '))).toBe(true);
    expect(lines.join('\n')).toContain('72 %');
  });
});

describe('the dial as a strip', () => {
  const row = (sweep: 'up' | 'down', position_pct: number, state: Verdict['dial'][number]['state']) =>
    ({ sweep, position_pct, state }) as Verdict['dial'][number];

  it('puts one character a state under its dial position, the way up over the way down, and explains those it used', () => {
    const dial = [
      row('up', 0, 'dark'),
      row('up', 50, 're-firing'),
      row('up', 100, 'steady'),
      row('down', 50, 'steady'),
      row('down', 0, 'dark'),
      row('down', 100, 'steady'),
    ];
    expect(dialStrip(dial, plain)).toEqual([
      '  Dial %  0  50 100',
      '  up      ...RRR===',
      '  down    ...======',
      '          = steady   . dark   R re-fires: hum, heat',
    ]);
  });

  it('gives every state a character of its own, so that it reads without colour', () => {
    const states = ['steady', 'dark', 'skipping', 're-firing', 'dropping-out', 'lopsided', 'wandering', 'undecided'] as const;
    const [, up] = dialStrip(
      states.map((state, index) => row('up', index, state)),
      plain,
    );
    expect(new Set(up?.slice('  up      '.length)).size).toBe(states.length);
  });

  it('has no strip for the way down where one position alone was judged', () => {
    expect(dialStrip([row('up', 30, 'steady')], plain)).toEqual(['  Dial %  30', '  up      ===', '          = steady']);
  });
});
