import { describe, expect, it } from 'vitest';
import { PROBLEMS } from '../../server/problems.ts';
import { EXAMPLE_PAIRING } from '../../server/schemas/pairing.ts';
import { testApp } from '../support/server-app.ts';
import { fakeSimulation } from '../support/server-fake-simulation.ts';
import { fullPairing, type Loose } from '../support/server-pairings.ts';
import { numberLeaves } from './schema-leaves.ts';

async function openApi(): Promise<Loose> {
  return (await (await testApp()).get('/openapi.json')).json();
}

describe('the OpenAPI document', () => {
  // Written again with `npx vitest run --config tests/vitest.config.ts tests/server/openapi.test.ts -u` after a schema was changed.
  it('is the one in the golden file', async () => {
    await expect(`${JSON.stringify(await openApi(), null, 2)}\n`).toMatchFileSnapshot('./openapi.golden.json');
  });

  it('refers to nothing that it does not hold, and holds nothing that is not referred to', async () => {
    const document = await openApi();
    const names = [...JSON.stringify(document).matchAll(/"#\/components\/schemas\/(\w+)"/g)].map(([, name]) => name);
    expect(new Set(names)).toEqual(new Set(Object.keys(document.components.schemas)));
    expect(document.openapi).toBe('3.1.0');
  });

  it('tells for every call what it does, and every problem of the table that it can answer with', async () => {
    const { paths, info } = await openApi();
    const operations = Object.values<Loose>(paths).flatMap((methods) => Object.values<Loose>(methods));
    expect(operations.filter(({ operationId, summary, tags }) => !operationId || !summary || !tags)).toEqual([]);
    for (const [code, { status, title }] of Object.entries(PROBLEMS)) {
      expect(info.description).toContain(`| ${status} | \`${code}\` | ${title} |`);
    }
    const told = operations.flatMap(({ responses }) =>
      Object.entries<Loose>(responses).flatMap(([status, { description }]) =>
        [...description.matchAll(/`([a-z-]+)`: /g)].map(([, code]) => [code, Number(status)] as const),
      ),
    );
    expect(told.length).toBeGreaterThan(10);
    for (const [code, status] of told) expect([code, PROBLEMS[code as keyof typeof PROBLEMS]?.status]).toEqual([code, status]);
  });

  it('shows an example that the service accepts', async () => {
    const document = await openApi();
    expect(document.components.schemas.AskedPairing.examples).toEqual([EXAMPLE_PAIRING]);
    const { post } = await testApp({ simulation: fakeSimulation() });
    expect((await post(document.components.schemas.AskedPairing.examples[0])).statusCode).toBe(201);
  });
});

describe('the documented range of a field', () => {
  it.each(['diac', 'timed'] as const)('is the one that is validated, for every number of a pairing with a %s drive', async (drive) => {
    const { post } = await testApp({ simulation: fakeSimulation() });
    const leaves = numberLeaves(fullPairing(drive));
    expect(leaves.length).toBeGreaterThan(80);
    const pathsRefused = async (leaf: (typeof leaves)[number], value: unknown): Promise<readonly string[]> => {
      const pairing = fullPairing(drive);
      leaf.set(pairing, value);
      const { issues } = (await post(pairing)).json();
      return (issues ?? []).map(({ path }: { path: string }) => path);
    };
    for (const leaf of leaves) {
      const { path, minimum, maximum, whole } = leaf;
      expect([path, leaf.description, minimum, maximum]).toEqual([path, expect.any(String), expect.any(Number), expect.any(Number)]);
      const step = whole ? 1 : 1e-3;
      expect(await pathsRefused(leaf, minimum - step)).toContain(path);
      expect(await pathsRefused(leaf, maximum + step)).toContain(path);
      expect(await pathsRefused(leaf, 'much')).toContain(path);
    }
  });
});
