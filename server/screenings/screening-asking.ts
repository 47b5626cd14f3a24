/** Accepts screenings: writes each down with what it selects, as queued. It runs nothing. */
import { randomBytes } from 'node:crypto';
import type { NewScreening, ScreeningRow } from '../../db/screenings.ts';
import { MODEL_VERSION } from '../../model/index.ts';
import type { AskedScreening, ScreeningRequest } from '../schemas/screening.ts';
import type { Issue } from '../schemas/wire-parsing.ts';
import { canonicalJson } from '../verdicts/canonical-inputs.ts';
import type { ScreeningStores } from './screening-dependencies.ts';
import { freezeSelection } from './selection-freezing.ts';

export type Accepted = { readonly ok: true; readonly row: ScreeningRow } | { readonly ok: false; readonly issues: readonly Issue[] };

/** bytes of a random id, in hexadecimal 26 digits */
const ID_BYTES = 13;

export function acceptScreening(stores: ScreeningStores, { startAt, ...request }: AskedScreening, now: Date): Accepted {
  try {
    return {
      ok: true,
      row: stores.screenings.together(() => {
        const created = stores.screenings.create(newScreening(request, now, startAt));
        const frozen = freezeSelection(stores, created, request);
        if (!frozen.ok) throw new Refused(frozen.issues);
        return queued(stores, created);
      }),
    };
  } catch (error) {
    if (error instanceof Refused) return { ok: false, issues: error.issues };
    throw error;
  }
}

/** One screening for every mains at which there are stale verdicts, unless one is under way; the rows of those. */
export function acceptStaleScreenings(stores: ScreeningStores, now: Date): readonly ScreeningRow[] {
  return stores.screenings.together(() => {
    const underWay = new Set(stores.screenings.unfinished().map(({ request }) => request));
    return stores.stalePairs.mains().flatMap((mains) => {
      const screening = newScreening({ stale: true, mains: { voltage_V: mains.voltage, frequency_Hz: mains.frequency } }, now, undefined);
      if (underWay.has(screening.request)) return [];
      const created = stores.screenings.create(screening);
      stores.screenings.resize(created.seq, stores.stalePairs.freeze(created.seq, mains));
      return [queued(stores, created)];
    });
  });
}

function newScreening(request: ScreeningRequest, now: Date, startAt: string | undefined): NewScreening {
  return {
    id: randomBytes(ID_BYTES).toString('hex'),
    request: canonicalJson(request),
    model_version: MODEL_VERSION,
    created_at: now.toISOString(),
    start_at: startAt === undefined ? null : new Date(startAt).toISOString(),
    listed: 'stale' in request ? 1 : 0,
  };
}

function queued({ screenings }: ScreeningStores, { seq, created_at }: ScreeningRow): ScreeningRow {
  screenings.change(seq, { state: 'queued', at: created_at });
  const row = screenings.findBySeq(seq);
  if (row === undefined) throw new Error('A screening was stored and not found.');
  return row;
}

/** Rolls the transaction of a screening back that selects nothing. */
class Refused extends Error {
  readonly issues: readonly Issue[];
  constructor(issues: readonly Issue[]) {
    super('The screening selects nothing.');
    this.issues = issues;
  }
}
