/** Holds the README's section on screenings to what really happens: its commands are run as they stand there. */
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { readScreenArguments } from '../../scripts/screen-arguments.ts';
import { VARIABLE_NAMES } from '../../server/environment.ts';
import { askedScreening } from '../../server/schemas/screening.ts';
import { importList } from '../imports/import-call.ts';
import { testApp } from '../support/server-app.ts';
import { temporaryFolder } from '../support/server-temporary-record.ts';

const ROOT = new URL('../../', import.meta.url).pathname;
const readme = readFileSync(`${ROOT}README.md`, 'utf8');
const section = /^## Screen a list overnight\n([\s\S]*?)^## /m.exec(readme)?.[1] ?? '';

describe('the README’s screenings', () => {
  it('run from a terminal as shown', { timeout: 300_000 }, async () => {
    const [, shown = ''] = /^npm run screen -- (--lamps .*)$/m.exec(section) ?? [];
    const out = join(temporaryFolder(), 'screened.csv');
    // Briefly, with one dial position: what is judged is not what is shown.
    const args = [...shown.split(' ').map((word) => (word.endsWith('-screened.csv') ? out : word)), '--dial', '70', '--corners', 'nominal'];
    expect(readScreenArguments(args)).toMatchObject({ ok: true, asked: { out: { file: out } } });
    const inherited = Object.entries(process.env).filter(([name]) => !name.startsWith('HOLDFAST_') && name !== 'NODE_OPTIONS');
    const child = spawn(process.execPath, ['--import', 'tsx', 'scripts/screen.ts', ...args], {
      cwd: ROOT,
      env: Object.fromEntries(inherited),
      stdio: 'ignore',
    });
    const [code] = await once(child, 'exit');
    expect(code).toBe(0);
    const rows = readFileSync(out, 'utf8').trimEnd().split('\r\n');
    expect(rows).toHaveLength(1 + 3 * 2 * 2);
    expect(rows.slice(1).map((row) => row.split(',')[3])).toEqual(rows.slice(1).map(() => 'judged'));
  });

  it('are asked for as shown, now and for later', async () => {
    const [, body = ''] = /\/v1\/screenings -H 'content-type: application\/json' \\\n {2}-d '([^']+)'/.exec(section) ?? [];
    const [, later = ''] = /Add `("startAt": "[^"]+")`/.exec(section) ?? [];
    const asked = JSON.parse(body);
    expect(askedScreening.safeParse({ ...asked, ...JSON.parse(`{${later}}`) }).success).toBe(true);

    const { app } = await testApp();
    const imports = [...section.matchAll(/\/v1\/imports\/(lamps|dimmers) -H 'content-type: text\/csv' --data-binary @(\S+)$/gm)];
    expect(imports).toHaveLength(2);
    for (const [, kind, file = ''] of imports) {
      await importList(app, readFileSync(ROOT + file), { kind: kind as 'lamps' | 'dimmers' });
    }
    const answer = await app.inject({ method: 'POST', url: '/v1/screenings', payload: asked });
    expect(answer.statusCode).toBe(202);
    expect(answer.json()).toMatchObject({ selected: { lamps: 3, dimmers: 2 }, counts: { total: 12 }, foundStored: { pairings: 0 } });
    const { id } = answer.json();
    const calls = [...section.matchAll(/`(GET|DELETE) (\/v1\/screenings\/\{id\}\S*)`/g)];
    expect(calls).toHaveLength(4);
    // The last one cancels, so that the stream of events ends by itself.
    const inOrder = [...calls].sort(([, a], [, b]) => (a === b ? 0 : a === 'DELETE' ? -1 : 1));
    for (const [, method, path = ''] of inOrder) {
      const reply = await app.inject({ method: method as 'GET' | 'DELETE', url: path.replace('{id}', id) });
      expect([path, reply.statusCode]).toEqual([path, 200]);
    }
  });

  it('are set by variables that the service knows', () => {
    const named = [...section.matchAll(/HOLDFAST_\w+/g)].map(([name]) => name);
    expect(named.length).toBeGreaterThan(2);
    expect(named.filter((name) => !VARIABLE_NAMES.includes(name))).toEqual([]);
  });
});
