import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { repeatedFields } from '../../server/json/repeated-fields.ts';

const pathsIn = (text: string): readonly string[] => repeatedFields(text).map(({ path }) => path);

describe('finding fields that are given twice', () => {
  it.each([
    ['{"a": 1, "a": 2}', ['a']],
    ['{"a": 1, "b": {"a": 2}, "c": [{"a": 3}, {"a": 4}]}', []],
    ['{"a": [{"b": 1}, {"b": 1, "c": [[], {}], "b": 2}]}', ['a[1].b']],
    [String.raw`{"a": 1, "\u0061": 2}`, ['a']],
    [String.raw`{"a": "},{\"a\":", "b": "a", "c": "\\"}`, []],
    ['{"a": 1, "a": 2, "a": 3}', ['a', 'a']],
    ['[1, [2, {"": 1, "": 2}]]', ['[1][1].']],
    ['"a"', []],
  ])('of %j gives %j', (text, paths) => {
    expect(pathsIn(text)).toEqual(paths);
  });

  it('finds none in what was written from a value, whatever its names and texts hold', () => {
    fc.assert(
      fc.property(fc.json(), fc.constantFrom(0, 2), (text, indent) => {
        expect(pathsIn(JSON.stringify(JSON.parse(text), null, indent))).toEqual([]);
      }),
    );
  });
});
