import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { nestsDeeperThan } from '../../server/json/nesting.ts';

const depthOf = (value: unknown): number =>
  typeof value === 'object' && value !== null ? 1 + Math.max(0, ...Object.values(value).map(depthOf)) : 0;

describe('the depth of a JSON text', () => {
  it('is that of its value, whatever brackets, quotes and backslashes its names and texts hold', () => {
    const text = fc.string({ unit: fc.constantFrom('[', '{', '"', '\\', 'a') });
    const value = fc.letrec((tie) => ({
      any: fc.oneof({ maxDepth: 6 }, text, fc.array(tie('any'), { maxLength: 3 }), fc.dictionary(text, tie('any'), { maxKeys: 3 })),
    })).any;
    fc.assert(
      fc.property(value, fc.nat(8), (any, limit) => {
        expect(nestsDeeperThan(limit, JSON.stringify(any))).toBe(depthOf(any) > limit);
      }),
    );
  });

  it('is told of a text that is not JSON as well', () => {
    expect(nestsDeeperThan(3, '[[[[')).toBe(true);
    expect(nestsDeeperThan(3, '[[["[')).toBe(false);
    expect(nestsDeeperThan(3, '[[[]]][[[')).toBe(false);
  });
});
