/** Every query of the catalogue that bench-catalogue.ts times, asked about entries drawn at random from a filled record. */
import { MODEL_VERSION } from '../model/index.ts';
import { APART, catalogueFor, dimmerId, FIRST_AT, lampId, OLD_VERSION, verdictIdOf } from './catalogue-filling.ts';

export interface Query {
  readonly name: string;
  /** of the usual number of requests, where one takes long */
  readonly share?: number;
  readonly ask: (stored: number) => { readonly path: string; readonly body?: unknown; readonly accept?: string };
}

const below = (limit: number) => Math.floor(Math.random() * limit);
const anyLamp = (stored: number) => lampId(below(catalogueFor(stored).lamps));
const anyDimmer = (stored: number) => dimmerId(below(catalogueFor(stored).dimmers));
const verdicts = (name: string, query: (stored: number) => string): Query => ({
  name: `verdicts by ${name}`,
  ask: (stored) => ({ path: `/v1/verdicts?${query(stored)}` }),
});
const moment = (number: number) => new Date(FIRST_AT + number * APART).toISOString();

export const QUERIES: readonly Query[] = [
  { name: 'one verdict, any of them', ask: (stored) => ({ path: `/v1/verdicts/${verdictIdOf(below(stored))}` }) },
  {
    name: 'one verdict without dial rows',
    ask: (stored) => ({ path: `/v1/verdicts/${verdictIdOf(below(stored))}?fields=grade,conditions,reasons` }),
  },
  { name: 'newest verdicts', ask: () => ({ path: '/v1/verdicts' }) },
  verdicts('lamp', (stored) => `lampId=${anyLamp(stored)}`),
  verdicts('dimmer', (stored) => `dimmerId=${anyDimmer(stored)}`),
  verdicts('lamp and dimmer', (stored) => `lampId=${anyLamp(stored)}&dimmerId=${anyDimmer(stored)}`),
  verdicts('grade', () => `grade=${['suitable', 'conditional', 'unsuitable', 'undetermined'][below(4)]}`),
  verdicts('count', () => `count=${1 + below(5)}`),
  verdicts('mains', () => 'mainsVoltage_V=120&mainsFrequency_Hz=60'),
  verdicts('mains frequency alone', () => 'mainsFrequency_Hz=60'),
  verdicts('model version', () => `modelVersion=${[OLD_VERSION, MODEL_VERSION][below(2)]}`),
  verdicts('stale', () => 'stale=true'),
  verdicts('not stale', () => 'stale=false'),
  verdicts('date', (stored) => {
    const from = below(stored);
    return `createdFrom=${moment(from)}&createdBefore=${moment(from + 1000)}`;
  }),
  verdicts('grade, count, mains, version', () => `grade=suitable&count=2&mainsVoltage_V=120&modelVersion=${OLD_VERSION}`),
  verdicts('dimmer, grade and stale', (stored) => `dimmerId=${anyDimmer(stored)}&grade=suitable&stale=true`),
  verdicts('what none has', () => 'grade=undetermined&mainsFrequency_Hz=47&stale=false'),
  {
    name: 'verdicts with dial rows, five',
    share: 0.3,
    ask: (stored) => ({ path: `/v1/verdicts?lampId=${anyLamp(stored)}&fields=id,grade,dial&limit=5` }),
  },
  {
    name: 'verdicts as CSV, a hundred',
    share: 0.5,
    ask: (stored) => ({ path: `/v1/verdicts?dimmerId=${anyDimmer(stored)}&limit=100`, accept: 'text/csv' }),
  },
  { name: 'which dimmers suit a lamp', ask: (stored) => ({ path: `/v1/lamps/${anyLamp(stored)}/dimmers` }) },
  { name: 'which lamps suit a dimmer', ask: (stored) => ({ path: `/v1/dimmers/${anyDimmer(stored)}/lamps?count=2` }) },
  {
    name: 'look-up of 1,000 pairs',
    share: 0.1,
    ask: (stored) => ({
      path: '/v1/verdicts/lookup',
      body: { pairs: Array.from({ length: 1000 }, () => ({ dimmerId: anyDimmer(stored), lampId: anyLamp(stored), count: 1 + below(5) })) },
    }),
  },
  { name: 'badge, any pair', ask: (stored) => ({ path: `/v1/badges/${anyDimmer(stored)}/${anyLamp(stored)}.svg` }) },
  { name: 'lamps by name', ask: () => ({ path: `/v1/lamps?name=room+${below(30)}` }) },
  { name: 'lamps by tag', ask: () => ({ path: `/v1/lamps?tag=room-${below(30)}` }) },
  { name: 'lamps by rated power', ask: () => ({ path: '/v1/lamps?ratedPowerFrom_W=5&ratedPowerTo_W=7' }) },
];
