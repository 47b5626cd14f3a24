/** Fits a profile in whatever thread it is called: a phase table as it stands, or a scope record from its CSV text. */
import { parse } from 'csv-parse/sync';
import {
  type FitGround,
  fitPhaseTable,
  fitScopeRecord,
  type PhaseTable,
  type ProfileFit,
  readScopeColumns,
  type ScopeTable,
  type StatedColumns,
  separatorOf,
} from '../../model/index.ts';
import type { CircuitFailure } from './simulation.ts';

export type ProfileQuestion =
  | { readonly kind: 'phase-table'; readonly table: PhaseTable; readonly ground: FitGround }
  | { readonly kind: 'scope-record'; readonly csv: string; readonly stated: StatedColumns; readonly ground: FitGround };

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
  const fit = record.ok ? fitScopeRecord(record.value, question.ground) : record;
  return fit.ok ? fit : refused(fit.failure);
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
