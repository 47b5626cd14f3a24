import { describe, expect, it } from 'vitest';
import { readEntry } from '../../server/catalogue/entries.ts';
import { testApp } from '../support/server-app.ts';
import { importList, outcomes, sendList } from './import-call.ts';

const NDJSON = 'application/x-ndjson';
const JSON_TYPE = 'application/json';

function lamp(id: unknown, changes: object = {}): string {
  return JSON.stringify({ id, lamp: { ratedPower_W: 40, load: { kind: 'resistive' } }, ...changes });
}

describe('an NDJSON list', () => {
  it.each<readonly [title: string, list: string, wanted: readonly string[]]>([
    ['one lamp a line', `${lamp('hall')}\n${lamp('attic')}\n`, ['1 created', '2 created']],
    ['no line break at the end', lamp('hall'), ['1 created']],
    ['CRLF, a byte-order mark and blank lines', `\ufeff${lamp('hall')}\r\n\r\n${lamp('attic')}\r\n`, ['1 created', '3 created']],
    [
      'a line that is not JSON, which is that row’s fault alone',
      `${lamp('hall')}\n{"id":\n${lamp('attic')}`,
      ['1 created', '2 refused', '3 created'],
    ],
    ['values that are no objects', '5\n"hall"\nnull\n[]\n{}', ['1 refused', '2 refused', '3 refused', '4 refused', '5 refused id lamp']],
    ['an unknown field', lamp('hall', { watts: 5 }), ['1 refused watts']],
    ['a field that is given twice', `${lamp('hall').replace('{', '{"id":"attic",')}\n${lamp('attic')}`, ['1 refused id', '2 created']],
    ['a field that reaches for the prototype', '{"id":"hall","__proto__":{"lamp":1}}', ['1 refused lamp __proto__']],
    ['what an entry has that was read, and nobody may send', lamp('hall', { revision: 3 }), ['1 refused revision']],
    [
      'ids that are none',
      `${lamp(7)}\n${lamp('')}\n${lamp('../x')}\n${lamp('x'.repeat(65))}`,
      ['1 refused id', '2 refused id', '3 refused id', '4 refused id'],
    ],
    ['an id twice', `${lamp('hall')}\n${lamp('hall')}`, ['1 created', '2 refused id']],
  ])('is read with %s', async (_, list, wanted) => {
    const { app } = await testApp();
    expect(outcomes(await importList(app, list, { type: NDJSON })).map(sorted)).toEqual(wanted.map(sorted));
  });

  it('without anything in it is a list of no rows', async () => {
    const { app } = await testApp();
    const { rows, summary } = await importList(app, '\n', { type: NDJSON });
    expect([rows.length, summary.rows, summary.kept]).toEqual([0, 0, true]);
  });

  it('shows an id as far as it helps, and not every fault of a row that is wrong all over', async () => {
    const { app } = await testApp();
    const many = Object.fromEntries(Array.from({ length: 50 }, (_, index) => [`field${index}`, 1]));
    const { rows } = await importList(app, lamp('x'.repeat(5000), many), { type: NDJSON });
    expect([rows[0]?.id, rows[0]?.issues?.length]).toEqual(['x'.repeat(64), 20]);
  });
});

function sorted(outcome: string): string {
  return outcome.split(' ').sort().join(' ');
}

describe('a JSON array', () => {
  it.each<readonly [title: string, list: string, wanted: readonly string[]]>([
    ['no elements', ' [ ] ', []],
    ['one element', `[${lamp('hall')}]`, ['1 created']],
    ['space and line breaks between elements', `\n[\n  ${lamp('hall')},\r\n\t${lamp('attic')}\n]\n`, ['1 created', '2 created']],
    [
      'brackets, commas and quotes inside texts',
      `[${lamp('hall', { name: 'a],[{"b\\" ,' })},${lamp('attic')}]`,
      ['1 created', '2 created'],
    ],
    [
      'elements that are no objects',
      '[5, "a, b", null, [1, [2]], true]',
      ['1 refused', '2 refused', '3 refused', '4 refused', '5 refused'],
    ],
  ])('is read with %s', async (_, list, wanted) => {
    const { app } = await testApp();
    expect(outcomes(await importList(app, list, { type: JSON_TYPE }))).toEqual(wanted);
  });

  it('keeps every character of its texts', async () => {
    const { app, entries } = await testApp();
    const note = 'Fädenlampe „8 W“ \\ "oben"\n💡 {[,]}';
    await importList(app, `[${lamp('hall', { note })}]`, { type: JSON_TYPE });
    expect(readEntry(entries, 'lamp', 'hall')?.note).toBe(note);
  });

  it('refuses the element that gives a field twice, and takes the others', async () => {
    const { app } = await testApp();
    const twice = lamp('hall').replace('"ratedPower_W":40', '$&,"ratedPower_W":4');
    const answer = await importList(app, `[${twice},${lamp('attic')}]`, { type: JSON_TYPE });
    expect(outcomes(answer)).toEqual(['1 refused lamp.ratedPower_W', '2 created']);
  });

  it.each([
    ['nothing at all', ''],
    ['an object', lamp('hall')],
    ['a text', '"["'],
    ['no closing bracket', `[${lamp('hall')}`],
    ['a cut inside an element', `[${lamp('hall')},{"id":"at`],
    ['a comma at its end', `[${lamp('hall')},]`],
    ['a comma too many', `[${lamp('hall')},,${lamp('attic')}]`],
    ['a comma alone', '[,]'],
    ['an element that is not JSON', `[${lamp('hall')}, lamp]`],
    ['a bracket that does not match', '[{"id":"hall"]}'],
    ['something behind it', `[${lamp('hall')}] ${lamp('attic')}`],
  ])('that is %s is refused whole', async (_, list) => {
    const { app, record } = await testApp();
    const answer = await sendList(app, list, { type: JSON_TYPE });
    expect([answer.statusCode, answer.json().type]).toEqual([400, 'urn:holdfast:problem:unreadable-list']);
    expect(record.prepare('SELECT count(*) FROM entries').pluck().get()).toBe(0);
  });
});
