/**
 * Interprets the rows of a scope record (fields as text, as a CSV reader hands them over) as columns of time, voltage and current in SI
 * units: up to two header rows or none, decimal point or comma, units from the header or stated beside it. Every fault names its row.
 */
import { type ProfileOutcome, refused } from './profile-failures.ts';
import { type Heading, type Quantity, readHeading, UNITS } from './scope-header.ts';
import type { ScopeRecord } from './scope-record.ts';

export interface StatedColumns {
  /** unit of each column, null where the header says it */
  readonly units: { readonly [quantity in Quantity]: string | null };
  /** place of each column from 0, null where the header says it, or where the order is time, voltage, current */
  readonly places: { readonly [quantity in Quantity]: number | null };
}

export const NOTHING_STATED: StatedColumns = {
  units: { time: null, voltage: null, current: null },
  places: { time: null, voltage: null, current: null },
};

const QUANTITIES = ['time', 'voltage', 'current'] as const;
const NUMBER = /^[+-]?(\d+([.,]\d*)?|[.,]\d+)(e[+-]?\d+)?$/i;
const MOST_HEADER_ROWS = 2;
const COMMA_HINT = 'Where the decimal mark is a comma, semicolons or tabs must separate the fields.';

/** the field separator that the text's first lines use: tab before semicolon before comma, which may be a decimal comma */
export function separatorOf(text: string): '\t' | ';' | ',' {
  const start = text.split(/\r?\n/, 4).join('\n');
  if (start.includes('\t')) return '\t';
  return start.includes(';') ? ';' : ',';
}

/** NaN where the text is no number; both a point and a comma in one (thousands) are none */
function numberOf(text: string): number {
  const trimmed = text.trim();
  return NUMBER.test(trimmed) ? Number(trimmed.replace(',', '.')) : Number.NaN;
}

type Row = readonly string[];

function isHeader(row: Row): boolean {
  return row.every((field) => Number.isNaN(numberOf(field)));
}

function unreadable(detail: string, row: number | null, column: string | null) {
  return refused({ kind: 'unreadable-record', detail, row, column });
}

/** what the header rows say of each column, taken together: a name in the first, a unit in the second */
function headingsOf(rows: readonly Row[], width: number): Heading[] {
  return Array.from({ length: width }, (_, place) => {
    const said = rows.map((row) => readHeading(row[place] ?? ''));
    const quantity = said.find((heading) => heading.quantity !== null)?.quantity ?? null;
    return { quantity, unit: said.find((heading) => heading.unit !== null)?.unit ?? null };
  });
}

function placesOf(headings: readonly Heading[], stated: StatedColumns): ProfileOutcome<{ [quantity in Quantity]: number }> {
  const width = headings.length;
  const places = { time: -1, voltage: -1, current: -1 };
  const nothingSaid = headings.every((h) => h.quantity === null) && QUANTITIES.every((q) => stated.places[q] === null);
  for (const [order, quantity] of QUANTITIES.entries()) {
    const named = headings.flatMap((h, place) => (h.quantity === quantity ? [place] : []));
    const place = stated.places[quantity] ?? (nothingSaid && width === 3 ? order : named[0]);
    if (stated.places[quantity] === null && named.length > 1) {
      return unreadable(
        `Columns ${named.map((p) => p + 1).join(' and ')} are both headed as ${quantity}: state which one to use.`,
        1,
        quantity,
      );
    }
    if (place === undefined) {
      const why = nothingSaid ? `the record has ${width} columns and no header that names them` : 'no header names it';
      return unreadable(`The ${quantity} column is not to be found: ${why}. Name it in the header or state its place.`, null, quantity);
    }
    if (!(Number.isInteger(place) && place >= 0 && place < width)) {
      return unreadable(`The ${quantity} column is stated as column ${place + 1}, but the record has ${width} columns.`, null, quantity);
    }
    places[quantity] = place;
  }
  if (new Set(Object.values(places)).size < 3) return unreadable('Time, voltage and current must be three different columns.', null, null);
  return { ok: true, value: places };
}

function divisorOf(quantity: Quantity, heading: Heading, stated: string | null): ProfileOutcome<number> {
  const known = Object.keys(UNITS[quantity]).join(', ');
  if (stated !== null && heading.unit !== null && stated !== heading.unit) {
    return unreadable(`The ${quantity} column is headed in ${heading.unit} but stated in ${stated}.`, 1, quantity);
  }
  const unit = stated ?? heading.unit;
  if (unit === null)
    return unreadable(`The unit of the ${quantity} column is not known: name it in the header or state it (${known}).`, null, quantity);
  const divisor = UNITS[quantity][unit];
  if (divisor === undefined)
    return unreadable(`The ${quantity} column cannot be in ${unit}: it must be in one of ${known}.`, null, quantity);
  return { ok: true, value: divisor };
}

export function readScopeColumns(rows: readonly Row[], stated: StatedColumns = NOTHING_STATED): ProfileOutcome<ScopeRecord> {
  let headers = 0;
  while (headers < MOST_HEADER_ROWS && headers < rows.length && isHeader(rows[headers] as Row)) headers++;
  const samples = rows.slice(headers);
  if (samples.length === 0) return unreadable('The record holds no rows of numbers.', null, null);
  const width = (samples[0] as Row).length;
  const named = Math.max(0, ...rows.slice(0, headers).map((row) => row.length));
  if (headers > 0 && (samples[0] as Row).slice(named).some((field) => field.trim() !== '')) {
    return unreadable(`Row ${headers + 1} has ${width} fields where the header has ${named}. ${COMMA_HINT}`, headers + 1, null);
  }
  const headings = headingsOf(rows.slice(0, headers), width);
  const places = placesOf(headings, stated);
  if (!places.ok) return places;
  const columns = {
    time: new Float64Array(samples.length),
    voltage: new Float64Array(samples.length),
    current: new Float64Array(samples.length),
  };
  for (const quantity of QUANTITIES) {
    const place = places.value[quantity];
    const divisor = divisorOf(quantity, headings[place] as Heading, stated.units[quantity]);
    if (!divisor.ok) return divisor;
    for (const [k, row] of samples.entries()) {
      const field = row[place];
      const number = headers + k + 1;
      if (row.length !== width)
        return unreadable(
          `Row ${number} has ${row.length} fields where the first row of numbers has ${width}. ${COMMA_HINT}`,
          number,
          null,
        );
      const value = numberOf(field as string);
      if (!Number.isFinite(value)) {
        const shown = (field as string).trim().slice(0, 30);
        return unreadable(`Row ${number}: the ${quantity} ${shown === '' ? 'is empty' : `is no number: "${shown}"`}.`, number, quantity);
      }
      columns[quantity][k] = value / divisor.value;
    }
  }
  return { ok: true, value: { ...columns, firstRow: headers + 1 } };
}
