/** Entries of the invented guest house, and calls that keep them, for tests of the catalogue. */
import type { TestApp } from './server-app.ts';
import { examplePairing, type Loose } from './server-pairings.ts';

export function dimmerEntry(changes: Loose = {}): Loose {
  return { name: 'Landing dimmer, old', dimmer: examplePairing().dimmer, ...changes };
}

export function lampEntry(changes: Loose = {}): Loose {
  return { name: 'Candle, warm white', tags: ['candle', 'landing'], lamp: examplePairing().lamps[0].lamp, ...changes };
}

type Headers = { readonly [name: string]: string };

export function send({ app }: Pick<TestApp, 'app'>, method: 'PUT' | 'POST' | 'DELETE', url: string, body?: unknown, headers: Headers = {}) {
  const payload = body === undefined ? {} : { payload: JSON.stringify(body) };
  return app.inject({
    method,
    url,
    headers: { ...(body === undefined ? {} : { 'content-type': 'application/json' }), ...headers },
    ...payload,
  });
}
