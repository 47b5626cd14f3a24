import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { IMPORT_LIMITS } from '../../server/imports/import-limits.ts';
import { type ListType, listRows } from '../../server/imports/list-rows.ts';

const LISTS: { readonly [type in ListType]: string } = {
  'text/csv': '\ufeffid;name;load.kind;ratedPower_W\r\nhall;"Fäden\r\n""💡"" ; oben";resistive;7,5\r\n\r\nattic;Gäste;resistive;8\r\n',
  'application/x-ndjson': '\ufeff{"id":"hall","name":"Fäden 💡"}\r\n\r\nno json\n{"id":"attic","note":"[{,\\"\\\\"}',
  'application/json': '\ufeff [ {"id":"hall","name":"Fäden 💡 ],["} ,\n [1,{"a":"\\"]"}], "x,y" ]\n',
};

async function* inPieces(bytes: Buffer, sizes: readonly number[]): AsyncGenerator<Uint8Array> {
  let from = 0;
  for (let index = 0; from < bytes.length; index += 1) {
    const size = sizes[index % sizes.length] ?? 1;
    yield bytes.subarray(from, from + size);
    from += size;
  }
}

async function read(type: ListType, sizes: readonly number[]): Promise<unknown[]> {
  const rows: unknown[] = [];
  const bytes = inPieces(Buffer.from(LISTS[type]), sizes);
  for await (const row of listRows({ type, charset: undefined, bytes }, 'lamp', IMPORT_LIMITS, undefined)) rows.push(row);
  return rows;
}

describe('a list', () => {
  it.each(Object.keys(LISTS) as ListType[])('of type %s reads the same however the network cuts it', async (type) => {
    const whole = await read(type, [100_000]);
    expect(whole.length).toBeGreaterThan(1);
    expect(await read(type, [1])).toEqual(whole);
    await fc.assert(
      fc.asyncProperty(fc.array(fc.integer({ min: 1, max: 40 }), { minLength: 1, maxLength: 6 }), async (sizes) => {
        expect(await read(type, sizes)).toEqual(whole);
      }),
      { numRuns: 60 },
    );
  });
});
