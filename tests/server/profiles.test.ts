import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { askedLamp } from '../../server/schemas/lamp.ts';
import { EXAMPLE_PROFILE } from '../../server/schemas/profile.ts';
import { testApp } from '../support/server-app.ts';
import { briefPairing, type Loose } from '../support/server-pairings.ts';

const KITCHEN = readFileSync(new URL('../../scripts/examples/records/kitchen.csv', import.meta.url), 'utf8');

async function postProfile(body: Loose) {
  const { app, post } = await testApp();
  const answer = await app.inject({ method: 'POST', url: '/v1/profiles', payload: body });
  return { status: answer.statusCode, body: answer.json() as Loose, post };
}

const record = (csv: string, more: object = {}) => ({ kind: 'scope-record', csv, ...more });

/** the kitchen's record with every line after the header changed */
function changed(
  change: (fields: readonly string[], index: number) => readonly string[] | undefined,
  header = 'time_ms,voltage_V,current_mA',
) {
  const lines = KITCHEN.trimEnd().split('\n').slice(1);
  const kept = lines.map((line, index) => change(line.split(','), index)).filter((fields) => fields !== undefined);
  return [header, ...kept.map((fields) => fields.join(','))].join('\n');
}

describe('POST /v1/profiles', () => {
  it('fits a phase table to a lamp that a pairing takes as it is', async () => {
    const { status, body, post } = await postProfile(EXAMPLE_PROFILE);
    expect(status).toBe(200);
    expect(body).toMatchObject({ form: 'iv-table', scope: null, lamp: { ratedPower_W: 8, load: { kind: 'iv-table' } } });
    expect(body.residual_pct).toBeLessThan(5);
    expect(body.fitted.power_W / body.recorded.power_W).toBeCloseTo(1, 1);
    expect(body.taken).toEqual([{ path: 'input.seriesResistance_Ohm', basis: expect.any(String) }]);
    expect(askedLamp.safeParse(body.lamp).success).toBe(true);
    const pairing = Object.assign(briefPairing(), { lamps: [{ count: 4, lamp: body.lamp }] });
    expect((await post(pairing)).statusCode).toBe(201);
  });

  it('gets the values of a known circuit back from a scope record within 5 %, and says what it took out of the record', async () => {
    const { status, body } = await postProfile(record(KITCHEN, { ratedPower_W: 6 }));
    expect(status).toBe(200);
    // scripts/examples/records/kitchen.csv: 4.7 uF, 26.7 Ohm in all, 6 W, 22 nF; 1.3 V and 3 mA of offset, current reversed
    const { load, input } = body.lamp;
    const near = (value: number, known: number) => expect(Math.abs(value / known - 1), `${value} against ${known}`).toBeLessThan(0.05);
    near(load.capacitance_uF, 4.7);
    near(load.surgeResistance_Ohm + input.seriesResistance_Ohm, 26.7);
    near(load.power_W, 6);
    near(input.capacitance_nF, 22);
    expect(body.scope).toMatchObject({ periods: 3, currentReversed: true });
    near(body.scope.voltage_V, 231);
    near(body.scope.voltageOffset_V, 1.3);
    near(Math.abs(body.scope.currentOffset_mA), 3);
    expect(body.residual_pct).toBeLessThan(2);
    expect(body.otherResidual_pct).toBeGreaterThan(15);
  });

  it.each<[string, object, string]>([
    ['no full period', record(changed((fields, index) => (index < 150 ? fields : undefined))), 'no-full-period'],
    ['under 40 samples a period', record(changed((fields, index) => (index % 8 === 0 ? fields : undefined))), 'too-few-samples'],
    ['swapped columns', record(changed(([t = '', v = '', i = '']) => [t, i, v])), 'columns-swapped'],
    [
      'a clipped current',
      record(changed(([t = '', v = '', i = '']) => [t, v, String(Math.max(-110, Math.min(110, Number(i))))])),
      'clipped',
    ],
    [
      'amperes where milliamperes were meant, told by the rated power',
      record(
        changed((fields) => fields, 'time_ms,voltage_V,current_A'),
        { ratedPower_W: 6 },
      ),
      'wrong-units',
    ],
    ['a time that stands still', record(changed(([, v = '', i = '']) => ['1', v, i])), 'time-not-rising'],
    ['a text that is no number', record(KITCHEN.replace('\n0.5,', '\nhalf,')), 'unreadable-record'],
    ['a header without units', record(KITCHEN.replace('time_ms,voltage_V,current_mA', 'time,voltage,current')), 'unreadable-record'],
    ['a quote that is not closed', record(`${KITCHEN}"1,2,3`), 'unreadable-record'],
  ])('refuses a scope record with %s by a clear fault', async (_, body, fault) => {
    const answer = await postProfile(body);
    expect(answer.status).toBe(422);
    expect(answer.body).toMatchObject({ type: 'urn:holdfast:problem:scope-record-unusable', fault, detail: expect.any(String) });
    expect(answer.body.detail.length).toBeGreaterThan(30);
  });

  it('names the row and the column of a fault in one of them', async () => {
    expect((await postProfile(record(KITCHEN.replace('\n0.5,', '\nhalf,')))).body).toMatchObject({ row: 7, column: 'time' });
  });

  it('takes the units that a header does not name, and columns in another order', async () => {
    const bare = changed(([t = '', v = '', i = '']) => [i, t, 'x', v], '').slice(1);
    const stated = { units: { time: 'ms', voltage: 'V', current: 'mA' }, columns: { time: 1, voltage: 3, current: 0 } };
    const { status, body } = await postProfile(record(bare, { ...stated, ratedPower_W: 6 }));
    expect([status, body.form]).toEqual([200, 'reservoir']);
  });

  it('takes a record as text/csv by itself, with the address for what it does not say', async () => {
    const { app } = await testApp();
    const send = (url: string, payload: string) => app.inject({ method: 'POST', url, headers: { 'content-type': 'text/csv' }, payload });
    const sent = await send('/v1/profiles?ratedPower_W=6', KITCHEN);
    expect(sent.statusCode).toBe(200);
    expect(sent.json()).toEqual((await postProfile(record(KITCHEN, { ratedPower_W: 6 }))).body);
    const bare = KITCHEN.slice(KITCHEN.indexOf('\n') + 1);
    expect((await send('/v1/profiles?units=ms,V,mA&columns=0,1,2', bare)).statusCode).toBe(200);
    const refused = await send('/v1/profiles?units=mA,ms,V', bare);
    expect([refused.statusCode, refused.json().issues[0].path]).toEqual([400, 'units']);
  });

  it('takes 8 MiB and no more', async () => {
    const rows = `${KITCHEN}${'0,0,0\n'.repeat(1_400_000)}`;
    const answer = await postProfile(record(rows));
    expect([answer.status, answer.body.detail]).toEqual([413, 'Send at most 8,388,608 bytes.']);
  });

  it('refuses a record of more rows than it reads', async () => {
    const answer = await postProfile(record(`${KITCHEN}${'0,0,0\n'.repeat(200_000)}`));
    expect(answer.body).toMatchObject({
      status: 422,
      fault: 'unreadable-record',
      detail: expect.stringContaining('more than 200000 rows'),
    });
  });

  it('refuses a record that no lamp draws, with the residual and why', async () => {
    const points = Array.from({ length: 180 }, (_, phase_deg) => ({ phase_deg, current_mA: phase_deg > 120 ? 40 : 0 }));
    const { status, body } = await postProfile({ kind: 'phase-table', voltage_V: 230, frequency_Hz: 50, points });
    expect(status).toBe(422);
    expect(body).toMatchObject({ type: 'urn:holdfast:problem:profile-not-fitted', limit_pct: 15 });
    expect(body.residual_pct).toBeGreaterThan(15);
  });

  it.each([
    [
      'currents in amperes where milliamperes are asked for',
      1e-3,
      /0\.00\d+ W where 8 W are rated: its currents are probably in amperes, and it takes milliamperes/,
    ],
    ['currents of another lamp', 5, /where 8 W are rated, 5\.\d* times as much/],
    ['currents of the wrong sign', -1, /runs against the voltage, .* change its sign/],
  ])('refuses a phase table with %s', async (_, factor, says) => {
    const points = EXAMPLE_PROFILE.points.map(({ phase_deg, current_mA }) => ({ phase_deg, current_mA: current_mA * factor }));
    const { status, body } = await postProfile({ ...EXAMPLE_PROFILE, points });
    expect([status, body.type]).toEqual([422, 'urn:holdfast:problem:profile-not-fitted']);
    expect(body.detail).toMatch(says);
  });

  it('refuses a bad body by its places', async () => {
    const flat = { ...EXAMPLE_PROFILE, points: EXAMPLE_PROFILE.points.map((point) => ({ ...point, current_mA: 0 })) };
    expect((await postProfile(flat)).body).toMatchObject({
      status: 400,
      issues: [{ path: 'points', message: expect.stringMatching(/every point is 0/) }],
    });
    expect((await postProfile({ kind: 'scope-record' })).body).toMatchObject({ status: 400, issues: [{ path: 'csv' }] });
    expect((await postProfile(record(KITCHEN, { units: { time: 'h' } }))).body).toMatchObject({
      status: 400,
      issues: [{ path: 'units.time' }],
    });
  });
});
