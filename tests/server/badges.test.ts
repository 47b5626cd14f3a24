import { describe, expect, it } from 'vitest';
import type { CountGrade, Grade } from '../../model/index.ts';
import type { AskedJudgement } from '../../server/simulation/asked-circuit.ts';
import { testApp } from '../support/server-app.ts';
import { dimmerEntry, lampEntry, send } from '../support/server-entries.ts';
import { CANNED_JUDGEMENT, fakeSimulation } from '../support/server-fake-simulation.ts';
import type { Loose } from '../support/server-pairings.ts';

type Outcome = Grade | readonly ['conditional', lowestDial: number] | AskedJudgement;

const LAMP_COUNTS = {
  circuit: null,
  group: 0,
  smallest: 4,
  largest: 5,
  unbroken: true,
  below: null,
  above: null,
  summary: 'For a test.',
  counters: CANNED_JUDGEMENT.counters,
};

function whole(outcome: Pick<CountGrade, 'count' | 'grade' | 'lowestDial'>): CountGrade {
  return { ...outcome, decidedBy: 'nominal', cause: null, detail: 'For a test.' };
}

/** One dimmer and one lamp; `judged` gives the outcome for each lamp count, in that order of time. */
async function pair(judged: readonly (readonly [count: number, outcome: Outcome, mains?: Loose])[] = []) {
  const outcomes = judged.map(([, outcome]) => outcome);
  const simulation = fakeSimulation(async () => ({ ok: true, value: judgementOf(outcomes.shift() ?? 'suitable') }));
  let time = Date.parse('2026-03-02T08:00:00.000Z');
  const now = () => {
    time += 1000;
    return new Date(time);
  };
  const app = await testApp({ simulation, now });
  await send(app, 'PUT', '/v1/dimmers/hall.1', dimmerEntry());
  await send(app, 'PUT', '/v1/lamps/candle.svg', lampEntry());
  const judge = (count: number, mains: Loose = { voltage_V: 230, frequency_Hz: 50 }) =>
    app.post({ mains, dimmer: { dimmerId: 'hall.1' }, lamps: [{ lampId: 'candle.svg', count }] });
  for (const [count, , mains] of judged) await judge(count, mains);
  const badge = (form: 'svg' | 'json', query = '', headers = {}) => app.get(`/v1/badges/hall.1/candle.svg.${form}${query}`, headers);
  const said = async (query = '') => (await badge('json', query)).json() as Loose;
  return { ...app, judge, badge, said };
}

function judgementOf(outcome: Outcome): typeof CANNED_JUDGEMENT {
  if (typeof outcome === 'string') return { ...CANNED_JUDGEMENT, grade: outcome };
  if ('dial' in outcome) return outcome;
  const [grade, position] = outcome;
  return { ...CANNED_JUDGEMENT, grade, conditions: [{ kind: 'lowest-dial', position, detail: 'For a test.' }] };
}

describe('a badge', () => {
  it.each<[string, Parameters<typeof pair>[0], string, string[], string]>([
    ['suitable at one count', [[4, 'suitable']], '?count=4', ['Suitable', '4 lamps'], 'Suitable: 4 lamps.'],
    ['suitable for one lamp', [[1, 'suitable']], '?count=1', ['Suitable', '1 lamp'], 'Suitable: 1 lamp.'],
    [
      'conditional on the dial',
      [[4, ['conditional', 25]]],
      '?count=4',
      ['Conditional', '4 lamps', 'dial from 25 % up'],
      'Conditional: 4 lamps, from 25 % of the dial up.',
    ],
    ['unsuitable', [[4, 'unsuitable']], '?count=4', ['Unsuitable', '4 lamps'], 'Unsuitable: 4 lamps.'],
    ['undetermined', [[4, 'undetermined']], '', ['Undetermined', '4 lamps'], 'Undetermined: 4 lamps.'],
    ['not screened at that count', [[4, 'suitable']], '?count=5', ['Not screened', 'No verdict yet'], 'Not screened: no verdict yet.'],
    [
      'conditional on the count',
      [
        [1, 'unsuitable'],
        [2, 'unsuitable'],
        [3, 'suitable'],
        [4, ['conditional', 10]],
        [5, ['conditional', 30]],
      ],
      '',
      ['Conditional', '3 to 5 lamps', 'dial from 30 % up'],
      'Conditional: 3 to 5 lamps, from 30 % of the dial up.',
    ],
    [
      'suitable at counts with gaps between them, which it does not close',
      [
        [1, 'suitable'],
        [2, 'suitable'],
        [4, 'suitable'],
      ],
      '',
      ['Suitable', '1, 2 or 4 lamps'],
      'Suitable: 1, 2 or 4 lamps.',
    ],
    [
      'suitable at many scattered counts',
      [
        [1, 'suitable'],
        [3, 'suitable'],
        [5, 'suitable'],
        [7, 'suitable'],
      ],
      '',
      ['Suitable', 'all 4 counts judged'],
      'Suitable: all 4 counts judged.',
    ],
    [
      'unsuitable at every count',
      [
        [1, 'unsuitable'],
        [2, 'unsuitable'],
      ],
      '',
      ['Unsuitable', '1 or 2 lamps'],
      'Unsuitable: 1 or 2 lamps.',
    ],
    [
      'undetermined where no count works and one is open',
      [
        [1, 'unsuitable'],
        [2, 'undetermined'],
      ],
      '',
      ['Undetermined', '1 or 2 lamps'],
      'Undetermined: 1 or 2 lamps.',
    ],
  ])('of a pair that is %s says so, in the picture and in the JSON', async (_, judged, query, [label, ...lines], sentence) => {
    const { badge, said } = await pair(judged);
    expect(await said(query)).toMatchObject({ label, lines, sentence });
    const picture = (await badge('svg', query)).body;
    expect(picture).toContain(`<title id="t">${sentence}</title>`);
    expect([...picture.matchAll(/<text [^>]*>([^<]*)<\/text>/g)].map(([, text]) => text)).toEqual([label, ...lines]);
  });

  it('speaks of one mains: the one that is asked for, else that of the newest verdict', async () => {
    const at120 = { voltage_V: 120, frequency_Hz: 60 };
    const { said } = await pair([
      [1, 'suitable'],
      [2, 'suitable'],
      [3, 'unsuitable', at120],
    ]);
    expect(await said()).toMatchObject({ grade: 'unsuitable', counts: [3], mains: at120 });
    expect(await said('?mainsVoltage_V=230&mainsFrequency_Hz=50')).toMatchObject({ grade: 'suitable', counts: [1, 2] });
    expect(await said('?mainsVoltage_V=240&mainsFrequency_Hz=50')).toMatchObject({ state: 'not-screened', mains: null });
  });

  it('speaks of the counts that one verdict was asked about, and first of a verdict of the very count', async () => {
    const counts = [
      { count: 3, grade: 'unsuitable' as const, lowestDial: null },
      { count: 4, grade: 'unsuitable' as const, lowestDial: null },
      { count: 5, grade: 'conditional' as const, lowestDial: 15 },
    ];
    const { said } = await pair([
      [4, { ...CANNED_JUDGEMENT, grade: 'suitable', lampCounts: { ...LAMP_COUNTS, counts: counts.map(whole) } }],
    ]);
    expect(await said()).toMatchObject({ grade: 'conditional', counts: [4, 5], judgedCounts: [3, 4, 5], lowestDial_pct: 15 });
    expect(await said('?count=5')).toMatchObject({ label: 'Conditional', lines: ['5 lamps', 'dial from 15 % up'] });
    expect(await said('?count=6')).toMatchObject({ state: 'not-screened' });
    const ofClass = { ...LAMP_COUNTS, circuit: 'one of three', counts: counts.map(whole) };
    const other = await pair([[4, { ...CANNED_JUDGEMENT, grade: 'suitable', lampCounts: ofClass }]]);
    expect(await other.said()).toMatchObject({ grade: 'suitable', judgedCounts: [4] });
  });

  it('names the verdicts it rests on, and carries a caution', async () => {
    const { said, get } = await pair([[4, 'suitable']]);
    const { verdicts, caution } = await said('?count=4');
    expect((await get(`/v1/verdicts/${verdicts[0].id}`)).json().grade).toBe('suitable');
    expect(caution).toMatch(/not a type test.*licensed person/);
  });

  it('is never one of before: an edit, a deletion, a new verdict show at once', async () => {
    const { app, badge, said, judge } = await pair([[4, 'suitable']]);
    expect([(await said()).label, (await badge('svg')).body.includes('Suitable')]).toEqual(['Suitable', true]);
    const edited = dimmerEntry({ dimmer: { ...dimmerEntry().dimmer, latchingCurrent_mA: 70 } });
    await send({ app }, 'PUT', '/v1/dimmers/hall.1', edited, { 'if-match': '*' });
    expect(await said()).toMatchObject({ state: 'outdated', label: 'Not screened', lines: ['Changed since judged'], grade: null });
    await judge(2);
    expect(await said()).toMatchObject({ state: 'judged', counts: [2] });
    await send({ app }, 'PUT', '/v1/dimmers/hall.1', dimmerEntry({ note: 'As it was.' }), { 'if-match': '*' });
    expect(await said()).toMatchObject({ state: 'judged', counts: [4] });
    await send({ app }, 'DELETE', '/v1/lamps/candle.svg');
    expect((await badge('json')).json()).toMatchObject({ status: 404, detail: 'The catalogue has no such lamp.' });
    expect((await badge('svg')).headers['cache-control']).toBe('no-cache');
  });

  it('answers 304 to who has it, and lets any page show it', async () => {
    const { badge } = await pair([[4, 'suitable']]);
    const first = await badge('svg');
    expect(first.headers).toMatchObject({
      'content-type': 'image/svg+xml; charset=utf-8',
      'cache-control': 'public, max-age=300',
      'access-control-allow-origin': '*',
      'cross-origin-resource-policy': 'cross-origin',
      etag: expect.stringMatching(/^"[\w-]{22}"$/),
    });
    const again = await badge('svg', '', { 'if-none-match': `W/${first.headers.etag}` });
    expect([again.statusCode, again.body, again.headers.etag]).toEqual([304, '', first.headers.etag]);
    expect(again.headers).toMatchObject({ 'cache-control': 'public, max-age=300', 'access-control-allow-origin': '*' });
    expect((await badge('json', '', { 'if-none-match': first.headers.etag })).statusCode).toBe(200);
  });

  it('has one size whatever it says, and nothing that runs or comes from elsewhere', async () => {
    const { badge } = await pair([[4, ['conditional', 25]]]);
    for (const query of ['', '?count=4', '?count=9']) {
      const { body } = await badge('svg', query);
      expect(body).toMatch(/^<svg xmlns="http:\/\/www\.w3\.org\/2000\/svg" width="264" height="60" viewBox="0 0 264 60" role="img"/);
      expect(body.replace('xmlns="http://www.w3.org/2000/svg"', '')).not.toMatch(/script|href|url\(|import|http|font-face|on\w+=/i);
      expect(body).toContain('prefers-color-scheme:dark');
    }
  });

  it.each([
    ['/v1/badges/nobody/candle.svg.svg', 404],
    ['/v1/badges/hall.1/nobody.svg', 404],
    ['/v1/badges/hall.1/candle.svg.png', 404],
    ['/v1/badges/hall.1/candle.svg.svg?count=0', 400],
    ['/v1/badges/hall.1/candle.svg.svg?lamps=4', 400],
    ['/v1/badges/hall.1/candle.svg.svg?mainsVoltage_V=230', 400],
    ['/v1/badges/ha%20ll/candle.svg', 400],
  ])('at %s answers %d', async (url, status) => {
    const { get } = await pair();
    expect((await get(url)).statusCode).toBe(status);
  });
});
