/**
 * Lists stored verdicts, newest first, by any combination of filters. One index is walked in that order, what it does not decide is
 * checked row by row. A page ends after a fixed number of rows looked at, so that a rare combination costs pages and not time, however
 * many verdicts are stored.
 */
import type { Grade } from '../model/index.ts';
import { preparedOnce } from './prepared-statements.ts';
import type { RecordDatabase } from './record.ts';

export interface VerdictFilter {
  readonly grade?: Grade | undefined;
  readonly modelVersion?: string | undefined;
  /** V and Hz, exactly */
  readonly mainsVoltage?: number | undefined;
  readonly mainsFrequency?: number | undefined;
  /** all lamps on the circuit */
  readonly lampCount?: number | undefined;
  /** ms since 1970; the first included, the second not */
  readonly createdFrom?: number | undefined;
  readonly createdBefore?: number | undefined;
  /** ids of catalogue entries: only verdicts asked for them */
  readonly dimmerId?: string | undefined;
  readonly lampId?: string | undefined;
  /** whether the entries it was asked for say something else now; only verdicts that were asked for entries are either */
  readonly stale?: boolean | undefined;
}

/** A verdict's place in the order of lists. */
export interface VerdictPlace {
  readonly created_at: number;
  readonly seq: number;
}

/** What a list shows of a verdict. */
export interface VerdictHeading extends VerdictPlace {
  readonly id: string;
  readonly model_version: string;
  readonly grade: Grade;
  readonly summary: string;
  readonly mains_voltage: number;
  readonly mains_frequency: number;
  readonly lamp_count: number;
}

export interface VerdictPage {
  readonly headings: readonly VerdictHeading[];
  /** the place below which the next page begins; undefined at the end */
  readonly next: VerdictPlace | undefined;
}

export interface VerdictSearch {
  /** Up to `limit` headings below `before`; fewer, with a `next`, where many rows were looked at in vain. */
  page(filter: VerdictFilter, before: VerdictPlace, limit: number): VerdictPage;
}

export const NEWEST: VerdictPlace = { created_at: Number.MAX_SAFE_INTEGER, seq: Number.MAX_SAFE_INTEGER };

/** Rows looked at for one page: each a read at some other place of the file, or one after the other in an index. Some milliseconds either way. */
const MOST_SCATTERED = 1_000;
const MOST_IN_INDEX = 8_000;

type Field = keyof VerdictFilter;
interface Walk {
  readonly fields: readonly Field[];
  readonly from: string;
  /** what the walk's rows are ordered by, with created_at */
  readonly seq: 'v.seq' | 'p.verdict';
  readonly condition: string;
}

const VERDICTS = 'verdicts v';
const PAIRS = 'judged_pairs p';
const DIMMER = `p.dimmer = (SELECT seq FROM entries WHERE kind = 'dimmer' AND id = @dimmerId)`;
const LAMP = `p.lamp = (SELECT seq FROM entries WHERE kind = 'lamp' AND id = @lampId)`;

/** Ways to walk, each through an index in the order of lists. Those of entries come first: no other filter tells as much. */
const PAIR_WALKS: readonly Walk[] = [
  { fields: ['dimmerId', 'lampId'], from: PAIRS, seq: 'p.verdict', condition: `${DIMMER} AND ${LAMP}` },
  { fields: ['lampId'], from: PAIRS, seq: 'p.verdict', condition: LAMP },
  { fields: ['dimmerId'], from: PAIRS, seq: 'p.verdict', condition: DIMMER },
];
const STALE_WALK: Walk = { fields: ['stale'], from: PAIRS, seq: 'p.verdict', condition: 'p.stale = 1' };
const VERDICT_WALKS: readonly Walk[] = [
  { fields: ['grade'], from: VERDICTS, seq: 'v.seq', condition: 'v.grade = @grade' },
  { fields: ['lampCount'], from: VERDICTS, seq: 'v.seq', condition: 'v.lamp_count = @lampCount' },
  { fields: ['mainsVoltage'], from: VERDICTS, seq: 'v.seq', condition: 'v.mains_voltage = @mainsVoltage' },
  { fields: ['modelVersion'], from: VERDICTS, seq: 'v.seq', condition: 'v.model_version = @modelVersion' },
];
/** Its index holds every filter of a verdict. */
const WALK_ALL: Walk = { fields: [], from: VERDICTS, seq: 'v.seq', condition: 'TRUE' };

/** What each filter asks of a row; those on ties are asked of one and the same tie. */
const VERDICT_CHECKS: readonly (readonly [Field, string])[] = [
  ['grade', 'v.grade = @grade'],
  ['modelVersion', 'v.model_version = @modelVersion'],
  ['mainsVoltage', 'v.mains_voltage = @mainsVoltage'],
  ['mainsFrequency', 'v.mains_frequency = @mainsFrequency'],
  ['lampCount', 'v.lamp_count = @lampCount'],
];
const TIE_CHECKS: readonly (readonly [Field, string])[] = [
  ['dimmerId', DIMMER],
  ['lampId', LAMP],
  ['stale', 'p.stale = @stale'],
];

const HEADING = 'seq, id, model_version, created_at, grade, summary, mains_voltage, mains_frequency, lamp_count';

interface LookedAt extends VerdictPlace {
  readonly hit: 0 | 1;
}

export function verdictSearch(record: RecordDatabase): VerdictSearch {
  const prepare = preparedOnce(record);
  const heading = record.prepare<[number], VerdictHeading>(`SELECT ${HEADING} FROM verdicts WHERE seq = ?`);

  /** How far back in time a walk comes in one page; as far as can be where it ends before. */
  const reachOf = (walk: Walk, filter: VerdictFilter, values: object): number => {
    const time = timeOf(walk);
    const sql = `SELECT ${time} AS at FROM ${walk.from} WHERE ${walk.condition} AND ${within(walk)}
      ORDER BY ${time} DESC, ${walk.seq} DESC LIMIT 1 OFFSET ${mostLookedAt(walk, filter) - 1}`;
    return prepare<{ at: number }>(sql).get(values)?.at ?? Number.NEGATIVE_INFINITY;
  };

  const choose = (filter: VerdictFilter, values: object): Walk => {
    const given = (walk: Walk) => walk.fields.length > 0 && walk.fields.every((field) => filter[field] !== undefined);
    const ofEntries = PAIR_WALKS.find(given);
    if (ofEntries !== undefined) return ofEntries;
    const walks = [...(filter.stale === true ? [STALE_WALK] : []), ...VERDICT_WALKS.filter(given)];
    const [first] = walks;
    if (first === undefined || (walks.length === 1 && checksFor(first, filter).length === 0)) return first ?? WALK_ALL;
    const reaches = [...walks, WALK_ALL].map((walk) => ({ walk, reach: reachOf(walk, filter, values) }));
    return reaches.reduce((best, one) => (one.reach < best.reach ? one : best)).walk;
  };

  return {
    page: (filter, before, limit) => {
      const values = {
        ...filter,
        stale: filter.stale === undefined ? undefined : Number(filter.stale),
        createdFrom: filter.createdFrom ?? 0,
        ...placeBelow(before, filter.createdBefore),
      };
      const walk = choose(filter, values);
      const most = mostLookedAt(walk, filter);
      const headings: VerdictHeading[] = [];
      let last: VerdictPlace = before;
      let lookedAt = 0;
      for (const { created_at, seq, hit } of prepare<LookedAt>(walkText(walk, filter)).iterate(values)) {
        // A verdict tied to several entries that a walk of ties passes comes once for each, one after the other.
        const isNext = seq !== last.seq;
        if (isNext && (headings.length === limit || lookedAt >= most)) return { headings, next: last };
        lookedAt += 1;
        last = { created_at, seq };
        if (hit === 0 || headings.at(-1)?.seq === seq) continue;
        const found = heading.get(seq);
        if (found !== undefined) headings.push(found);
      }
      return { headings, next: undefined };
    },
  };
}

/** A date before which all lie is a place like a cursor's; the earlier of the two counts. */
function placeBelow(before: VerdictPlace, createdBefore: number | undefined): { readonly at: number; readonly seq: number } {
  if (createdBefore !== undefined && createdBefore <= before.created_at) return { at: createdBefore, seq: 0 };
  return { at: before.created_at, seq: before.seq };
}

const timeOf = ({ from }: Walk) => (from === VERDICTS ? 'v.created_at' : 'p.created_at');

function within(walk: Walk): string {
  return `(${timeOf(walk)}, ${walk.seq}) < (@at, @seq) AND ${timeOf(walk)} >= @createdFrom`;
}

function mostLookedAt(walk: Walk, filter: VerdictFilter): number {
  const readsRows = checksFor(walk, filter).length > 0 && (walk !== WALK_ALL || filter.stale !== undefined);
  return readsRows ? MOST_SCATTERED : MOST_IN_INDEX;
}

/** What a walk leaves to be checked, the cheapest first. */
function checksFor(walk: Walk, filter: VerdictFilter): readonly string[] {
  const asked = (checks: readonly (readonly [Field, string])[]) =>
    checks.flatMap(([field, condition]) => (filter[field] === undefined || walk.fields.includes(field) ? [] : [condition]));
  const verdictChecks = asked(VERDICT_CHECKS);
  const tieChecks = asked(TIE_CHECKS);
  if (walk.from === PAIRS) {
    const ofVerdict = `(SELECT ${verdictChecks.join(' AND ')} FROM ${VERDICTS} WHERE v.seq = p.verdict)`;
    return verdictChecks.length === 0 ? tieChecks : [...tieChecks, ofVerdict];
  }
  const tied = `EXISTS (SELECT 1 FROM ${PAIRS} WHERE p.verdict = v.seq AND ${tieChecks.join(' AND ')})`;
  return tieChecks.length === 0 ? verdictChecks : [...verdictChecks, tied];
}

function walkText(walk: Walk, filter: VerdictFilter): string {
  // AND would evaluate both its sides; a CASE stops at the first that does not hold.
  const hit = checksFor(walk, filter).reduceRight((rest, check) => `CASE WHEN ${check} THEN ${rest} ELSE 0 END`, '1');
  return `SELECT ${walk.seq} AS seq, ${timeOf(walk)} AS created_at, ${hit} AS hit FROM ${walk.from}
    WHERE ${walk.condition} AND ${within(walk)} ORDER BY ${timeOf(walk)} DESC, ${walk.seq} DESC`;
}
