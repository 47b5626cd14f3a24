import { executionAsyncResource } from 'node:async_hooks';
import { setFlagsFromString } from 'node:v8';
import { describe, expect, it } from 'vitest';
import { keepTickShape, keptTicks } from '../../server/tick-shape.ts';

/** Whether two objects have one hidden class, as only V8 can say. */
function sameShape(): (one: object, other: object) => boolean {
  setFlagsFromString('--allow-natives-syntax');
  const same = new Function('one', 'other', 'return %HaveSameMap(one, other)') as (one: object, other: object) => boolean;
  setFlagsFromString('--no-allow-natives-syntax');
  return same;
}

const tickObject = (...values: readonly unknown[]) =>
  new Promise<object>((resolve) => {
    process.nextTick(() => resolve(executionAsyncResource()), ...values);
  });

describe('the shape of the objects of process.nextTick', () => {
  it('is that of the one which is kept, with values for its callback or without', async () => {
    keepTickShape();
    const [plain, withValues] = [await tickObject(), await tickObject(1, 'two')];
    const [kept = {}] = keptTicks();
    const same = sameShape();
    expect([same(kept, plain), same(kept, withValues)]).toEqual([true, true]);
    expect(same(kept, { callback: () => undefined, args: undefined })).toBe(false);
  });
});
