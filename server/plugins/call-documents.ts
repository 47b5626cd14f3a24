/** The OpenAPI 3.1 document, generated from the schemas that validate, at /openapi.json, and the reference page at /docs. */
import swagger from '@fastify/swagger';
import swaggerUi from '@fastify/swagger-ui';
import { jsonSchemaTransform, jsonSchemaTransformObject } from 'fastify-type-provider-zod';
import { MODEL_VERSION } from '../../model/index.ts';
import type { App } from '../app.ts';
import { problemTable } from '../problems.ts';
import { EXAMPLE_PAIRING } from '../schemas/pairing.ts';
import { REFERENCE_PAGE_CSP } from './security-headers.ts';

const INTRODUCTION = `
Says whether a lamp runs steadily on a phase-cut wall dimmer, computed from the circuit: dimmer, lamps, mains, and an optional added
load. A dimmer without a neutral draws its timing current through the lamps, so the answer is a simulation and not a look-up.

**Mains voltage can kill.** A verdict is a screening, not a type test. Work on fixed wiring is for a licensed person, to the local
code; follow both makers' instructions. Show the \`cautions\` of a verdict wherever you show its grade.

Send a pairing to \`POST /v1/verdicts\`. Only the mains, the dimmer's latching and holding current, and each lamp's load are required;
every other field has a documented default, and the verdict lists each one that was filled in under \`assumptions\`.

\`\`\`sh
curl -s http://127.0.0.1:8080/v1/verdicts -H 'content-type: application/json' -d '${JSON.stringify(EXAMPLE_PAIRING)}'
\`\`\`

- Numbers carry their unit in the field's name: \`_V _A _mA _W _Ohm _kOhm _nF _uF _mH _us _ms _Hz _deg _pct\`.
- Unknown fields are refused, so that a misspelt one never becomes a silent default.
- The same inputs under the same model version are computed once: asked again, the stored verdict is returned with status 200.
- Computed by model version ${MODEL_VERSION}.

## Problems

Errors are \`application/problem+json\` (RFC 9457). \`type\` is \`urn:holdfast:problem:\` and the code. Where the input is wrong, \`issues\`
lists every place with what would be right.

${problemTable()}
`;

export async function documentCalls(app: App): Promise<void> {
  await app.register(swagger, {
    openapi: {
      openapi: '3.1.0',
      info: { title: 'Holdfast', version: '1', description: INTRODUCTION.trim() },
      tags: [
        { name: 'verdicts', description: 'Judge pairings and read what was judged.' },
        { name: 'catalogue', description: 'Keep dimmers and lamps under ids of your own, and find them.' },
        { name: 'screenings', description: 'Judge a lamp list against a shelf of dimmers, in the background.' },
        { name: 'operations', description: 'For whoever runs the service.' },
      ],
    },
    transform: jsonSchemaTransform,
    transformObject: (document) => withPlainComponentNames(jsonSchemaTransformObject(document) as object) as never,
  });
  app.get('/openapi.json', { schema: { hide: true } as object }, async (_request, reply) => {
    // As text: the document has no response schema to be written by.
    return reply.type('application/json; charset=utf-8').send(JSON.stringify(app.swagger()));
  });
  await app.register(swaggerUi, {
    routePrefix: '/docs',
    staticCSP: REFERENCE_PAGE_CSP,
    uiConfig: {
      url: '/openapi.json',
      docExpansion: 'list',
      defaultModelsExpandDepth: 0,
      defaultModelRendering: 'model',
      deepLinking: true,
    },
    // The bar would offer to load documents from elsewhere, which the page's policy forbids.
    theme: { title: 'Holdfast reference', css: [{ filename: 'plain.css', content: '.swagger-ui .topbar { display: none; }' }] },
  });
}

interface Components {
  readonly components?: { readonly schemas?: { readonly [name: string]: unknown } };
}

/**
 * Every named schema is generated twice, for requests as `NameInput` and for responses as `Name`. Drops those that nothing refers to,
 * and gives a request schema that stands alone its plain name.
 */
function withPlainComponentNames(document: Components): object {
  const schemas = document.components?.schemas ?? {};
  const used = new Set<string>();
  const follow = (part: unknown): void => {
    for (const [, name = ''] of JSON.stringify(part).matchAll(/"#\/components\/schemas\/(\w+)"/g)) {
      if (used.has(name)) continue;
      used.add(name);
      follow(schemas[name]);
    }
  };
  follow({ ...document, components: null });

  const plain = (name: string): string => {
    const bare = name.replace(/Input$/, '');
    return used.has(bare) ? name : bare;
  };
  const kept = Object.entries(schemas).filter(([name]) => used.has(name));
  const renamed = {
    ...document,
    components: { ...document.components, schemas: Object.fromEntries(kept.map(([name, schema]) => [plain(name), schema])) },
  };
  const text = JSON.stringify(renamed).replace(
    /"#\/components\/schemas\/(\w+)"/g,
    (_, name: string) => `"#/components/schemas/${plain(name)}"`,
  );
  return JSON.parse(text) as object;
}
