import { gzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import { testApp } from '../support/server-app.ts';
import { fakeSimulation } from '../support/server-fake-simulation.ts';
import { examplePairing } from '../support/server-pairings.ts';
import { BAD_INPUT_CASES, broken } from './bad-input.cases.ts';

interface Issue {
  readonly path: string;
  readonly message: string;
}

describe('a bad question', () => {
  it.each(BAD_INPUT_CASES.map((badCase) => [badCase.title, badCase] as const))(
    'with %s is refused, names the place, says what would be right, and leaves no row',
    async (_, badCase) => {
      const simulation = fakeSimulation();
      const { post, verdicts } = await testApp({ simulation });
      const answer = await post(broken(badCase));
      expect(answer.statusCode).toBe(400);
      expect(answer.headers['content-type']).toMatch(/^application\/problem\+json/);
      const { type, issues } = answer.json() as { type: string; issues: Issue[] };
      expect(type).toBe('urn:holdfast:problem:invalid-request');
      expect(issues.map(({ path }) => path)).toContain(badCase.path);
      expect(issues.find(({ path }) => path === badCase.path)?.message).toMatch(badCase.says);
      expect(simulation.asked()).toBe(0);
      expect(verdicts.count()).toBe(0);
    },
  );

  it('is answered with everything that is wrong with it, not only the first', async () => {
    const { post } = await testApp();
    const pairing = examplePairing();
    pairing.mains.voltage_V = 'high';
    pairing.mains.frequency = 50;
    pairing.dimmer.holdingCurrent_mA = 90;
    pairing.dimmer.turnOffTime_us = -1;
    pairing.dimmer.drive = { kind: 'timed', firingAngleFull_deg: 170, gatePulse_us: 0 };
    pairing.lamps[0].count = 0;
    pairing.lamps[0].lamp.load.points[2].voltage_V = 10;
    pairing.lamps[0].lamp.load.points[0].current_mA = -1;
    pairing.options = { dialPositions_pct: [5, 5, 200] };
    const { issues } = (await post(pairing)).json() as { issues: Issue[] };
    expect(issues.map(({ path }) => path).sort()).toEqual([
      'dimmer.drive.firingAngleFull_deg',
      'dimmer.drive.gatePulse_us',
      'dimmer.holdingCurrent_mA',
      'dimmer.turnOffTime_us',
      'lamps[0].count',
      'lamps[0].lamp.load.points[0].current_mA',
      'lamps[0].lamp.load.points[2].voltage_V',
      'mains.frequency',
      'mains.voltage_V',
      'options.dialPositions_pct[1]',
      'options.dialPositions_pct[2]',
    ]);
  });

  it('with a number that JSON writes and no double holds is refused', async () => {
    const { post, verdicts } = await testApp();
    const answer = await post(JSON.stringify(examplePairing()).replace('"voltage_V":230', '"voltage_V":1e999'));
    expect(answer.statusCode).toBe(400);
    expect(answer.json().issues).toEqual([{ path: 'mains.voltage_V', message: 'must be a number from 85 to 265 (V)' }]);
    expect(verdicts.count()).toBe(0);
  });

  it('does not get an answer many times its own size', async () => {
    const { post } = await testApp();
    const pairing = examplePairing();
    for (let number = 0; number < 50_000; number += 1) pairing[`field${number}`] = 1;
    const answer = await post(pairing);
    expect(answer.json().issues).toHaveLength(200);
    expect(answer.json().detail).toMatch(/first 200 are listed, 49800 more/);
  });

  it.each([
    ['cut off', '{"mains": {', 400, 'malformed-json'],
    ['not JSON', 'mains=230', 400, 'malformed-json'],
    ['empty', '', 400, 'malformed-json'],
    ['holding NaN', '{"mains": NaN}', 400, 'malformed-json'],
    ['nested beyond reason', '['.repeat(400_000), 400, 'malformed-json'],
    ['nested beyond reason, and JSON', `${'['.repeat(400_000)}${']'.repeat(400_000)}`, 400, 'malformed-json'],
    ['reaching for the prototype', '{"__proto__": {"x": 1}}', 400, 'invalid-request'],
    ['a list', '[]', 400, 'invalid-request'],
    ['a string', '"pairing"', 400, 'invalid-request'],
    ['null', 'null', 400, 'invalid-request'],
    ['over 1 MiB', `"${'x'.repeat(1024 * 1024)}"`, 413, 'body-too-large'],
  ])('whose body is %s is refused', async (_, body, status, code) => {
    const { post, verdicts } = await testApp();
    const answer = await post(body);
    expect([answer.statusCode, answer.json().type]).toEqual([status, `urn:holdfast:problem:${code}`]);
    expect(verdicts.count()).toBe(0);
  });

  it('is told at which place its body stops being JSON, and what would be right there', async () => {
    const { post } = await testApp();
    const answer = await post('{"mains": {"voltage_V": NaN}}');
    expect(answer.json().detail).toBe(
      'The body cannot be read as JSON. It breaks at line 1, column 25: expected a value: an object, a list, a "text", a number, true, false or null; found "NaN}}".',
    );
  });

  it('whose field is given twice is refused with its path, rather than judged by the later one', async () => {
    const { post, verdicts } = await testApp();
    const text = JSON.stringify(examplePairing());
    const answer = await post(text.replace(/"count":\d+/, '$&,"coun\\u0074":9').replace('"voltage_V":230', '$&,"voltage_V":120'));
    expect(answer.statusCode).toBe(400);
    expect(answer.json().issues.map(({ path }: Issue) => path)).toEqual(['mains.voltage_V', 'lamps[0].count']);
    expect(verdicts.count()).toBe(0);
  });

  it('in another encoding than UTF-8 is refused, and no replacement characters are kept', async () => {
    const { app } = await testApp();
    const payload = Buffer.from('{"name": "Caf\u00e9", "dimmer": {"latchingCurrent_mA": 50, "holdingCurrent_mA": 30}}', 'latin1');
    const headers = { 'content-type': 'application/json; charset=iso-8859-1' };
    const answer = await app.inject({ method: 'PUT', url: '/v1/dimmers/cafe', headers, payload });
    expect([answer.statusCode, answer.json().type]).toEqual([400, 'urn:holdfast:problem:malformed-json']);
    expect(answer.json().detail).toMatch(/UTF-8/);
    expect((await app.inject('/v1/dimmers/cafe')).statusCode).toBe(404);
  });

  it('sent compressed is refused with 415 that says so', async () => {
    const { app } = await testApp();
    const payload = gzipSync(JSON.stringify(examplePairing()));
    const headers = { 'content-type': 'application/json', 'content-encoding': 'gzip' };
    const answer = await app.inject({ method: 'POST', url: '/v1/verdicts', headers, payload });
    expect([answer.statusCode, answer.json().detail]).toEqual([415, 'Send the body as application/json, not compressed.']);
  });

  it('whose table is unsorted throughout is told of its points, and not of a field that is right', async () => {
    const { post } = await testApp();
    const pairing = examplePairing();
    pairing.lamps[0].lamp.load.points = Array.from({ length: 40 }, (_, index) => ({ voltage_V: 325 - index, current_mA: 40 }));
    const { issues } = (await post(pairing)).json() as { issues: Issue[] };
    expect(issues).toHaveLength(39);
    for (const { path, message } of issues) {
      expect(path).toMatch(/^lamps\[0\]\.lamp\.load\.points\[\d+\]\.voltage_V$/);
      expect(message).toMatch(/must be above the one before it/);
    }
  });

  it('is told once of a count that is both no whole number and too large', async () => {
    const { post } = await testApp();
    const pairing = examplePairing();
    pairing.lamps[0].count = 1e308;
    expect((await post(pairing)).json().issues).toEqual([{ path: 'lamps[0].count', message: 'must be a whole number from 1 to 500' }]);
  });

  it.each(['text/plain', 'application/x-www-form-urlencoded', 'application/xml', 'nonsense'])(
    'sent as %s is refused with 415',
    async (type) => {
      const { app } = await testApp();
      const payload = JSON.stringify(examplePairing());
      const answer = await app.inject({ method: 'POST', url: '/v1/verdicts', headers: { 'content-type': type }, payload });
      expect([answer.statusCode, answer.json().type]).toEqual([415, 'urn:holdfast:problem:unsupported-media-type']);
    },
  );

  it('without a body is refused', async () => {
    const { app } = await testApp();
    const answer = await app.inject({ method: 'POST', url: '/v1/verdicts' });
    expect([answer.statusCode, answer.json().type]).toEqual([400, 'urn:holdfast:problem:invalid-request']);
  });

  it('with a record that no lamp fits is answered with 422, with the residual and the reason', async () => {
    const { post, verdicts } = await testApp();
    const pairing = examplePairing();
    // current only while the voltage falls towards its zero crossing: neither a curve of the voltage nor a reservoir
    const points = Array.from({ length: 180 }, (_, phase_deg) => ({ phase_deg, current_mA: phase_deg > 120 ? 40 : 0 }));
    pairing.lamps[0].lamp = { load: { kind: 'phase-table', voltage_V: 230, frequency_Hz: 50, points } };
    const answer = await post(pairing);
    expect(answer.statusCode).toBe(422);
    const problem = answer.json();
    expect(problem).toMatchObject({
      type: 'urn:holdfast:problem:profile-not-fitted',
      limit_pct: 15,
      issues: [{ path: 'lamps[0].lamp.load', message: problem.detail }],
    });
    expect(problem.residual_pct).toBeGreaterThan(15);
    expect(verdicts.count()).toBe(0);
  });

  it('with a class of which no circuit has the stated power factor is answered with 422, with those that it has', async () => {
    const { post } = await testApp();
    const pairing = examplePairing();
    pairing.lamps[0].lamp = { ratedPower_W: 8, powerFactor: 0.99, load: { kind: 'class', class: 'reservoir-driver' } };
    const problem = (await post(pairing)).json();
    expect(problem).toMatchObject({
      type: 'urn:holdfast:problem:class-does-not-fit',
      status: 422,
      issues: [{ path: 'lamps[0].lamp', message: problem.detail }],
    });
    const [least, most] = problem.powerFactors;
    expect(least).toBeGreaterThan(0.2);
    expect(most).toBeLessThan(0.9);
  });
});

describe('a bad address', () => {
  const some = 'a'.repeat(26);
  it.each([
    ['/v1/verdicts/nothing', 'id'],
    [`/v1/verdicts/${'A'.repeat(26)}`, 'id'],
    [`/v1/verdicts/${'a'.repeat(300)}`, 'id'],
    [`/v1/verdicts/${some}/waveforms`, 'dial_pct'],
    [`/v1/verdicts/${some}/waveforms?dial_pct=`, 'dial_pct'],
    [`/v1/verdicts/${some}/waveforms?dial_pct=101`, 'dial_pct'],
    [`/v1/verdicts/${some}/waveforms?dial_pct=0x10`, 'dial_pct'],
    [`/v1/verdicts/${some}/waveforms?dial_pct=50&dial_pct=60`, 'dial_pct'],
    [`/v1/verdicts/${some}/waveforms?dial_pct=50&sweep=sideways`, 'sweep'],
    [`/v1/verdicts/${some}/waveforms?dial_pct=50&dial=60`, 'dial'],
    ['/v1/verdicts?grade=fine', 'grade'],
    ['/v1/verdicts?limit=0', 'limit'],
    ['/v1/verdicts?limit=101', 'limit'],
    ['/v1/verdicts?limit=2.5', 'limit'],
    ['/v1/verdicts?limit=', 'limit'],
    ['/v1/verdicts?mainsVoltage_V=many', 'mainsVoltage_V'],
    ['/v1/verdicts?modelVersion=', 'modelVersion'],
    ['/v1/verdicts?lampid=x', 'lampid'],
    ['/v1/verdicts?lampId=x%20y', 'lampId'],
    ['/v1/verdicts?stale=maybe', 'stale'],
    ['/v1/verdicts?count=0', 'count'],
    ['/v1/verdicts?createdFrom=yesterday', 'createdFrom'],
    ['/v1/verdicts?createdBefore=2026-13-01', 'createdBefore'],
    ['/v1/verdicts?fields=grade,colour', 'fields'],
    ['/v1/verdicts?fields=id,id', 'fields'],
    ['/v1/verdicts?cursor=', 'cursor'],
    ['/v1/verdicts?cursor=zzz', 'cursor'],
    [`/v1/verdicts?cursor=${Buffer.from('before--5-1').toString('base64url')}`, 'cursor'],
    [`/v1/verdicts?cursor=${Buffer.from('before-5-1').toString('base64url')}=`, 'cursor'],
    [`/v1/verdicts?cursor=${'x'.repeat(200)}`, 'cursor'],
  ])('%s is refused and names %s', async (url, path) => {
    const { get } = await testApp();
    const answer = await get(url);
    expect([answer.statusCode, answer.json().type]).toEqual([400, 'urn:holdfast:problem:invalid-request']);
    expect(answer.json().issues.map((issue: Issue) => issue.path)).toEqual([path]);
  });

  it('with a moment that is none is told what one looks like', async () => {
    const { get } = await testApp();
    const message = 'must be a date like 2026-03-02 or a moment like 2026-03-02T08:00:00Z, given once';
    for (const wrong of ['yesterday', '2026-02-30T00:00:00Z', '2026-03-02&createdFrom=2026-03-03']) {
      const answer = await get(`/v1/verdicts?createdFrom=${wrong}`);
      expect(answer.json().issues).toEqual([{ path: 'createdFrom', message }]);
    }
  });

  it.each([
    ['DELETE', '/v1/lamps/none', 'entry-not-found'],
    ['DELETE', '/v1/verdicts', 'no-such-call'],
  ] as const)('%s %s that states a type and has no body is not asked for one', async (method, url, code) => {
    const { app } = await testApp();
    const answer = await app.inject({ method, url, headers: { 'content-type': 'application/json' } });
    expect(answer.json().type).toBe(`urn:holdfast:problem:${code}`);
  });

  it.each([
    ['GET', '/nowhere'],
    ['DELETE', '/v1/verdicts'],
    ['PUT', '/v1/verdicts/x'],
  ] as const)('%s %s is answered with a 404 problem', async (method, url) => {
    const { app } = await testApp();
    const answer = await app.inject({ method, url });
    expect([answer.statusCode, answer.json().type]).toEqual([404, 'urn:holdfast:problem:no-such-call']);
  });

  it('that cannot be decoded is answered with a 400 problem', async () => {
    const { get } = await testApp();
    const answer = await get('/v1/verdicts/%zz');
    expect([answer.statusCode, answer.json().type]).toEqual([400, 'urn:holdfast:problem:malformed-http']);
  });
});
