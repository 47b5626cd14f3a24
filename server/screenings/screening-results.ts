/**
 * What became of the pairings of a screening, in their order, as far as it is known: streamed page by page, so that neither the length
 * of the list nor a slow reader costs memory. A screening may be running meanwhile.
 */
import { stringify } from 'csv-stringify/sync';
import { outcomeAt, PAGE_LENGTH } from '../../db/screening-pages.ts';
import type { FailureRow, ScreeningRow } from '../../db/screenings.ts';
import type { Grade } from '../../model/index.ts';
import { pacing } from '../imports/pacing.ts';
import type { ScreeningRequest } from '../schemas/screening.ts';
import { type PairingPositions, pairingPositions } from './pairing-positions.ts';
import type { ScreeningStores } from './screening-dependencies.ts';
import { countsOf } from './screening-frame.ts';

export interface ResultRow {
  readonly lampId: string;
  readonly dimmerId: string;
  readonly count: number;
  readonly outcome: 'stored' | 'judged' | 'failed';
  readonly grade: Grade | null;
  /** of the verdict, or why there is none */
  readonly summary: string;
  readonly verdictId: string | null;
  /** where it failed: what was judged, to be tried by hand */
  readonly failure?: { readonly kind: string; readonly attempts: number; readonly pairing: unknown };
}

type ResultStores = Pick<ScreeningStores, 'screenings' | 'screeningSelection' | 'screeningPages' | 'screeningVerdicts'>;

/** pages read at a time */
const STRIDE = 4;

export async function* screeningResults(stores: ResultStores, row: ScreeningRow): AsyncGenerator<readonly ResultRow[]> {
  const positions = pairingPositions(row, countsOf(JSON.parse(row.request) as ScreeningRequest), stores.screeningSelection);
  const breathe = pacing();
  for (let next = 0; ; ) {
    const pages = stores.screeningPages.from(row.seq, next, STRIDE);
    const last = pages.at(-1);
    if (last === undefined) return;
    const rows = pages.flatMap(({ page, outcomes }) => pageRows(stores, row.seq, positions, page, outcomes));
    if (rows.length > 0) yield rows;
    next = last.page + 1;
    await breathe();
  }
}

function pageRows(
  { screenings, screeningSelection: selection, screeningVerdicts }: ResultStores,
  seq: number,
  positions: PairingPositions,
  page: number,
  outcomes: Buffer,
): readonly ResultRow[] {
  const known = positions.page(page).flatMap((pairing) => {
    const { outcome, verdict } = outcomeAt(outcomes, pairing.position - page * PAGE_LENGTH);
    return outcome === 'open' ? [] : [{ ...pairing, outcome, verdict }];
  });
  const lampIds = idsAt(
    (from, to) => selection.entries(seq, 'lamp', from, to),
    known.map(({ lamp }) => lamp),
  );
  const dimmerIds = idsAt(
    (from, to) => selection.entries(seq, 'dimmer', from, to),
    known.map(({ dimmer }) => dimmer),
  );
  const verdicts = screeningVerdicts.bySeq(known.flatMap(({ verdict }) => (verdict === 0 ? [] : [verdict])));
  const hasFailures = known.some(({ outcome }) => outcome === 'failed');
  const failures = hasFailures ? screenings.failuresBetween(seq, page * PAGE_LENGTH, (page + 1) * PAGE_LENGTH) : [];
  const failureAt = new Map(failures.map((failure) => [failure.position, failure]));

  return known.map(({ position, lamp, dimmer, count, outcome, verdict }) => {
    const ids = { lampId: lampIds(lamp), dimmerId: dimmerIds(dimmer), count };
    if (outcome === 'failed') return { ...ids, ...failedRow(failureAt.get(position)) };
    const stored = verdicts.get(verdict);
    if (stored === undefined) throw new Error(`A screening points at verdict ${verdict}, which is not there.`);
    return { ...ids, outcome, grade: stored.grade, summary: stored.summary, verdictId: stored.id };
  });
}

function failedRow(failure: FailureRow | undefined) {
  if (failure === undefined) throw new Error('A screening gave a pairing up and does not say why.');
  const { kind, detail, attempts, pairing } = failure;
  return {
    outcome: 'failed' as const,
    grade: null,
    summary: detail,
    verdictId: null,
    failure: { kind, attempts, pairing: JSON.parse(pairing) as unknown },
  };
}

type ReadEntries = (from: number, to: number) => readonly { readonly place: number; readonly id: string }[];

/** Ids by place, read by the ranges that a page touches: places of one page are few and mostly neighbours. */
function idsAt(read: ReadEntries, places: readonly number[]): (place: number) => string {
  const wanted = [...new Set(places)].sort((a, b) => a - b);
  const ids = new Map<number, string>();
  for (let index = 0; index < wanted.length; ) {
    const from = wanted[index] ?? 0;
    let to = from + 1;
    for (index += 1; wanted[index] === to; index += 1) to += 1;
    for (const { place, id } of read(from, to)) ids.set(place, id);
  }
  return (place) => {
    const id = ids.get(place);
    if (id === undefined) throw new Error(`A screening's selection has nothing at place ${place}.`);
    return id;
  };
}

const CSV_COLUMNS = ['lampId', 'dimmerId', 'count', 'outcome', 'grade', 'summary', 'verdictId'] as const;
const LINE_END = '\r\n';

export async function* resultsCsv(results: AsyncIterable<readonly ResultRow[]>): AsyncGenerator<string> {
  yield CSV_COLUMNS.join(',') + LINE_END;
  for await (const rows of results) {
    const cells = rows.map((row) => CSV_COLUMNS.map((column) => (column === 'summary' ? defused(row.summary) : row[column])));
    yield stringify(cells, { record_delimiter: LINE_END });
  }
}

export async function* resultsNdjson(results: AsyncIterable<readonly ResultRow[]>): AsyncGenerator<string> {
  for await (const rows of results) yield rows.map((row) => `${JSON.stringify(row)}\n`).join('');
}

/** A spreadsheet would run a text that begins so as a formula. */
function defused(text: string): string {
  return /^[=+\-@\t\r]/.test(text) ? `'${text}` : text;
}
