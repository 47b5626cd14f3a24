import { describe, expect, it } from 'vitest';
import { putEntry, readEntry } from '../../server/catalogue/entries.ts';
import { COLUMN_SETS } from '../../server/imports/csv-columns.ts';
import { dimmerEntry, lampEntry } from '../../server/schemas/entry.ts';
import { CSV_EXAMPLES } from '../../server/schemas/import-lists.ts';
import { testApp } from '../support/server-app.ts';
import { fullPairing } from '../support/server-pairings.ts';
import { FIXED_NOW } from '../support/server-temporary-record.ts';
import { CSV_CASES, DECIMAL_CASES, HEADER_CASES } from './csv-lists.cases.ts';
import { importList, outcomes, sendList } from './import-call.ts';

async function appWithOneLamp() {
  const test = await testApp();
  const entry = { lamp: { ratedPower_W: 40, load: { kind: 'resistive' as const } } };
  putEntry(test.entries, 'already-there', { kind: 'lamp', entry }, { kind: 'whatever' }, FIXED_NOW);
  return test;
}

describe('a CSV list', () => {
  it.each(CSV_CASES.map((csvCase) => [csvCase.title, csvCase] as const))('is read with %s', async (_, csvCase) => {
    const { app, entries } = await appWithOneLamp();
    const imported = await importList(app, csvCase.csv, csvCase);
    expect(outcomes(imported)).toEqual(csvCase.outcomes);
    for (const [id, entry] of Object.entries(csvCase.stored ?? {})) {
      expect(readEntry(entries, 'lamp', id)).toEqual({
        id,
        revision: expect.any(Number),
        createdAt: expect.any(String),
        revisedAt: expect.any(String),
        ...(entry as object),
      });
    }
    for (const [row, says] of Object.entries(csvCase.says ?? {})) {
      const issues = imported.rows.find((line) => line.row === Number(row))?.issues ?? [];
      expect(issues.map(({ message }) => message).join('\n')).toMatch(says);
    }
  });

  it.each(DECIMAL_CASES.map((decimalCase) => [decimalCase.title, decimalCase] as const))(
    'has its numbers read right, or not at all, with %s',
    async (_, { separator, query = '', cells, read }) => {
      const { app, entries } = await testApp();
      const lines = cells.map((cell, index) => [`lamp-${index}`, 'resistive', cell].join(separator));
      const csv = [['id', 'load.kind', 'ratedPower_W'].join(separator), ...lines].join('\n');
      const { rows } = await importList(app, csv, { query });
      const found = rows.map(({ id, issues }) => {
        const stored = readEntry(entries, 'lamp', id ?? '');
        return stored !== undefined && 'lamp' in stored ? stored.lamp.ratedPower_W : issues?.[0]?.message;
      });
      expect(found).toEqual(read.map((wanted) => (wanted instanceof RegExp ? expect.stringMatching(wanted) : wanted)));
    },
  );

  it.each(HEADER_CASES)('whose header has %s is refused before a row is read', async (_, header, kind, paths) => {
    const { app, record } = await testApp();
    const answer = await sendList(app, `${header}\nhall,40,resistive\n`, { kind });
    expect([answer.statusCode, answer.json().type]).toEqual([400, 'urn:holdfast:problem:invalid-request']);
    expect(answer.json().issues.map(({ path }: { path: string }) => path)).toEqual(paths);
    expect(record.prepare('SELECT count(*) FROM entries').pluck().get()).toBe(0);
  });

  it('whose header is nearly right is told the right name', async () => {
    const { app } = await testApp();
    const { issues } = (await sendList(app, 'id,LOAD.KIND,rated_power_w,input.capacitance\n')).json();
    expect(issues.slice(0, 3).map(({ message }: { message: string }) => message)).toEqual([
      'is not a column of a lamp list; load.kind is one',
      'is not a column of a lamp list; ratedPower_W is one',
      'is not a column of a lamp list; input.capacitance_nF is one',
    ]);
  });

  it.each([
    ['empty', '', /is empty/],
    ['blank', '\n\n , ,\n', /is empty/],
    ['not in the encoding that it says', Buffer.from('id;name\nhall;K\u00fcche\n', 'latin1'), /is not text in utf-8\. .*windows-1252/],
    ['cut off inside a quote', 'id,load.kind\n"hall,resistive\nattic,resistive\n', /a quote is opened and never closed/],
    ['spoilt by a quote inside a cell', 'id,name,load.kind\nhall,7" globe,resistive\n', /near line 2: a quote stands inside a cell/],
    ['spoilt by text behind a quote', 'id,name,load.kind\nhall,"7" globe,resistive\n', /a quote stands inside a cell/],
  ])('that is %s is refused whole', async (_, csv, says) => {
    const { app, record } = await testApp();
    const answer = await sendList(app, csv);
    expect([answer.statusCode, answer.json().type]).toEqual([400, 'urn:holdfast:problem:unreadable-list']);
    expect(answer.json().detail).toMatch(says);
    expect(record.prepare('SELECT count(*) FROM entries').pluck().get()).toBe(0);
  });

  it('can give every value that an entry can hold, and no other', () => {
    const names = (kind: 'lamp' | 'dimmer') => new Set(COLUMN_SETS[kind].byName.keys());
    for (const drive of ['diac', 'timed'] as const) {
      const { dimmer, lamps } = fullPairing(drive);
      expect([...leaves(dimmer)].filter((leaf) => !names('dimmer').has(leaf))).toEqual([]);
      for (const { lamp } of lamps) expect([...leaves(lamp)].filter((leaf) => !names('lamp').has(leaf))).toEqual([]);
    }
    const texts = Object.keys(lampEntry.shape).filter((field) => field !== 'lamp');
    expect(texts.every((field) => names('lamp').has(field))).toBe(true);
    expect(Object.keys(dimmerEntry.shape).filter((field) => field !== 'dimmer')).toEqual(texts);
    expect(names('lamp').has('load')).toBe(false);
  });

  it.each(['lamp', 'dimmer'] as const)('as the reference shows it for a %s is taken whole', async (kind) => {
    const { app } = await testApp();
    const { summary } = await importList(app, CSV_EXAMPLES[kind], { kind: `${kind}s` });
    expect([summary.refused, summary.created]).toEqual([0, summary.rows]);
    expect(summary.rows).toBeGreaterThan(0);
  });

  it('makes dimmers of the columns of a dimmer', async () => {
    const { app, entries } = await testApp();
    const csv = [
      'id,latchingCurrent_mA,latchingCurrent_mA.typical,latchingCurrent_mA.maximum,holdingCurrent_mA,drive.kind,drive.breakover_V.positive,drive.breakover_V.negative,choke.lossResistance_kOhm,snubber',
      'bedroom,60,,,35,,,,,',
      'hall,,40,60,35,diac,32,33,null,null',
      'attic,60,40,60,35,,,,,',
    ].join('\n');
    const imported = await importList(app, csv, { kind: 'dimmers' });
    expect(outcomes(imported)).toEqual([
      '2 created',
      '3 created',
      '4 refused dimmer.latchingCurrent_mA.typical dimmer.latchingCurrent_mA.maximum',
    ]);
    expect(readEntry(entries, 'dimmer', 'hall')).toMatchObject({
      dimmer: {
        latchingCurrent_mA: { typical: 40, maximum: 60 },
        drive: { kind: 'diac', breakover_V: { positive: 32, negative: 33 } },
        choke: { lossResistance_kOhm: null },
        snubber: null,
      },
    });
  });
});

/** The names of the columns that the values of a part would stand in; a table is one. */
function* leaves(part: object, before: readonly string[] = []): Generator<string> {
  for (const [field, value] of Object.entries(part)) {
    const path = [...before, field];
    if (typeof value === 'object' && value !== null && !Array.isArray(value)) yield* leaves(value, path);
    else yield path.join('.');
  }
}
