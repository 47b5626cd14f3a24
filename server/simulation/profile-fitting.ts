/** Fits a profile in whatever thread it is called: a phase table as it stands, or a scope record from its CSV text. */
import { parse } from 'csv-parse/sync';
import {
  type FitGround,
  fitPhaseTable,
  fitScopeRecord,
  type PhaseTable,
  type ProfileFit,
  readScopeColumns,
  type ScopeRecord,
  type ScopeTable,
  type StatedColumns,
  separatorOf,
} from '../../model/index.ts';
import type { CircuitFailure } from './simulation.ts';

/** What no record shows, by the supply that turns out to have been recorded: 180 V r.m.s. and more, and less. */
export interface GroundBySupply {
  readonly high: FitGround;
  readonly low: FitGround;
}

export type ProfileQuestion =
  | { readonly kind: 'phase-table'; readonly table: PhaseTable; readonly ground: FitGround }
  | { readonly kind: 'scope-record'; readonly csv: string; readonly stated: StatedColumns; readonly grounds: GroundBySupply };

/** `scope`: what was read from a scope record and taken out of it; null where a phase table was given */
export type FittedProfile = ProfileFit & { readonly scope: ScopeTable | null };

type Outcome = { readonly ok: true; readonly value: FittedProfile } | { readonly ok: false; readonly failure: CircuitFailure };

/** rows; a hundred periods at two thousand samples each, and some seconds of a thread */
const MOST_ROWS = 200_000;

export function fitProfile(question: ProfileQuestion): Outcome {
  if (question.kind === 'phase-table') {
    const fit = fitPhaseTable(question.table, question.ground);
    return fit.ok ? { ok: true, value: { ...fit.value, scope: null } } : refused(fit.failure);
  }
  const rows = rowsOf(question.csv);
  if (!rows.ok) return rows;
  const record = readScopeColumns(rows.value, question.stated);
  const fit = record.ok ? fitScopeRecord(record.value, groundOf(record.value, question.grounds)) : record;
  return fit.ok ? fit : refused(fit.failure);
}

const HIGH_SUPPLY_FROM = 180;

function groundOf({ voltage }: ScopeRecord, { high, low }: GroundBySupply): FitGround {
  let squares = 0;
  for (let k = 0; k < voltage.length; k++) squares += (voltage[k] ?? 0) ** 2;
  return Math.sqrt(squares / voltage.length) >= HIGH_SUPPLY_FROM ? high : low;
}

type Refused = Extract<Outcome, { ok: false }>;

function refused(failure: Extract<CircuitFailure, { kind: 'profile-refused' }>['failure']): Refused {
  return { ok: false, failure: { kind: 'profile-refused', group: null, failure } };
}

function rowsOf(csv: string): { readonly ok: true; readonly value: readonly string[][] } | Refused {
  try {
    const value: string[][] = parse(csv, {
      delimiter: separatorOf(csv),
      bom: true,
      relax_column_count: true,
      skip_empty_lines: true,
      to: MOST_ROWS + 1,
    });
    if (value.length <= MOST_ROWS) return { ok: true, value };
    return unreadable(`The record has more than ${MOST_ROWS} rows: send fewer periods, or every second sample.`, null);
  } catch (error) {
    if (!(error instanceof Error)) throw error;
    const row = 'lines' in error && typeof error.lines === 'number' ? error.lines : null;
    return unreadable(
      `The record is not CSV: a quoted field is not closed, or closed too early${row === null ? '' : ` (line ${row})`}.`,
      row,
    );
  }
}

function unreadable(detail: string, row: number | null): Refused {
  return refused({ kind: 'unreadable-record', detail, row, column: null });
}
