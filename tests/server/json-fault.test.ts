import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { findJsonFault } from '../../server/json/json-fault.ts';

const isJson = (text: string): boolean => {
  try {
    JSON.parse(text);
    return true;
  } catch {
    return false;
  }
};

describe('finding where a text stops being JSON', () => {
  it.each([
    ['{"a": 1,}', 1, 9, /field name/, '"}"'],
    ['[1, 2,]', 1, 7, /a value/, '"]"'],
    ['{\n  "a": 1\n  "b": 2\n}', 3, 3, /a comma/, String.raw`"\"b\": 2"`],
    ['{"a" 1}', 1, 6, /a colon/, '"1}"'],
    ["{'a': 1}", 1, 2, /double quotes/, `"'a': 1}"`],
    ['{"a": 1', 1, 8, /bracket that closes/, 'the end of the text'],
    ['{"a": "b\n}', 1, 7, /closed by a double quote/, String.raw`"\"b"`],
    ['{"a": 1} // lamp', 1, 10, /end of the text/, '"// lamp"'],
    ['{"a": 1]', 1, 8, /bracket that closes/, '"]"'],
    ['{"a": 01}', 1, 7, /a value/, '"01}"'],
    ['{"a": 2,5}', 1, 9, /field name/, '"5}"'],
    ['{"a": NaN}', 1, 7, /a value/, '"NaN}"'],
  ])('finds the fault of %j at line %i, column %i', (text, line, column, expected, found) => {
    expect(isJson(text)).toBe(false);
    expect(findJsonFault(text)).toEqual({ line, column, expected: expect.stringMatching(expected), found });
  });

  it('finds a fault exactly where JSON.parse refuses', () => {
    const piece = fc.constantFrom(
      '{',
      '}',
      '[',
      ']',
      ':',
      ',',
      '"a"',
      '"',
      '\\',
      '1',
      '-',
      '.5',
      'e3',
      '0',
      'true',
      'null',
      ' ',
      '\n',
      '\t',
      'x',
      '\u0007',
      '\u00a0',
    );
    const scraps = fc.array(piece, { maxLength: 12 }).map((pieces) => pieces.join(''));
    const damaged = fc.tuple(fc.json(), fc.nat(), fc.nat({ max: 2 }), piece).map(([json, place, cut, inserted]) => {
      const at = place % (json.length + 1);
      return json.slice(0, at) + inserted + json.slice(at + cut);
    });
    const agree = (text: string): boolean => (findJsonFault(text) === null) === isJson(text);
    fc.assert(fc.property(fc.oneof(scraps, damaged, fc.json()), agree), { numRuns: 3_000 });
  });
});
