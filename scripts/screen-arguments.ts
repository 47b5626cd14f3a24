/** Reads what `npm run screen` is told: two lists, where the results go, and what the pairings share. */
import { extname } from 'node:path';
import { parseArgs } from 'node:util';
import type { ListType } from '../server/imports/list-rows.ts';
import { type AskedScreening, askedScreening } from '../server/schemas/screening.ts';
import { parseWire } from '../server/schemas/wire-parsing.ts';

export const SCREEN_USAGE = `Usage: npm run screen -- --lamps FILE --dimmers FILE --out FILE [options]

Judges every lamp of one list with every dimmer of another.

  --lamps FILE    the lamps: .csv, .json (an array) or .ndjson, each with an id,
                  as POST /v1/imports/lamps takes them
  --dimmers FILE  the dimmers, likewise
  --out FILE      where the results go: .csv or .ndjson
  --counts LIST   how many of a lamp are on the circuit, rising: 1,4 (default 1)
  --mains LIST    volts and hertz: 230,50 (default) or 120,60
  --dial LIST     dial positions in %, rising (default 0,5,10 and so on to 100)
  --corners WHICH all (default) or nominal
  --help          print this

Interrupted by Ctrl-C, by a kill or by a power cut, the same command goes on
where it was: until the end, what is known stands in FILE.partial beside the
results. HOLDFAST_WORKERS sets how many pairings are judged at a time, and
HOLDFAST_REDIS_URL has worker processes judge them. Ends with 0 when every
pairing was judged, with 1 when one was given up, with 2 when the lists cannot
be read, with 130 after Ctrl-C.
`;

export interface ScreenList {
  readonly file: string;
  readonly type: ListType;
}

export interface ScreenArguments {
  readonly lamps: ScreenList;
  readonly dimmers: ScreenList;
  readonly out: { readonly file: string; readonly form: 'csv' | 'ndjson' };
  readonly screening: AskedScreening;
}

export type ReadArguments =
  | { readonly ok: true; readonly asked: ScreenArguments }
  | { readonly ok: false; readonly help: true }
  | { readonly ok: false; readonly help: false; readonly complaint: readonly string[] };

const LIST_TYPE_OF: { readonly [extension: string]: ListType } = {
  '.csv': 'text/csv',
  '.json': 'application/json',
  '.ndjson': 'application/x-ndjson',
  '.jsonl': 'application/x-ndjson',
};
const FORM_OF: { readonly [extension: string]: 'csv' | 'ndjson' } = { '.csv': 'csv', '.ndjson': 'ndjson', '.jsonl': 'ndjson' };

export function readScreenArguments(args: readonly string[]): ReadArguments {
  try {
    const text = { type: 'string' } as const;
    const { values } = parseArgs({
      args: [...args],
      options: {
        lamps: text,
        dimmers: text,
        out: text,
        counts: text,
        mains: text,
        dial: text,
        corners: text,
        help: { type: 'boolean', short: 'h', default: false },
      },
    });
    if (values.help) return { ok: false, help: true };
    const lamps = listOf('lamps', values.lamps);
    const dimmers = listOf('dimmers', values.dimmers);
    const form = values.out === undefined ? undefined : FORM_OF[extname(values.out).toLowerCase()];
    const screening = screeningOf(values);
    const complaint = [lamps, dimmers, screening].flatMap((read) => (Array.isArray(read) ? read : []));
    if (form === undefined) complaint.push('--out must name a file that ends in .csv or .ndjson');
    if (complaint.length > 0) return { ok: false, help: false, complaint };
    return {
      ok: true,
      asked: { lamps, dimmers, out: { file: values.out, form }, screening } as ScreenArguments,
    };
  } catch (error) {
    if (!(error instanceof TypeError)) throw error;
    return { ok: false, help: false, complaint: [error.message.split('. ')[0] ?? error.message] };
  }
}

function listOf(option: 'lamps' | 'dimmers', file: string | undefined): ScreenList | string[] {
  const type = file === undefined ? undefined : LIST_TYPE_OF[extname(file).toLowerCase()];
  if (file === undefined || type === undefined) return [`--${option} must name a file that ends in .csv, .json or .ndjson`];
  return { file, type };
}

interface ScreeningOptions {
  readonly counts?: string | undefined;
  readonly mains?: string | undefined;
  readonly dial?: string | undefined;
  readonly corners?: string | undefined;
}

function screeningOf({ counts, mains = '230,50', dial, corners }: ScreeningOptions): AskedScreening | string[] {
  const [voltage_V, frequency_Hz, ...more] = numbers(mains);
  if (frequency_Hz === undefined || more.length > 0) return ['--mains must be volts and hertz, like 230,50'];
  const options = {
    ...(dial === undefined ? {} : { dialPositions_pct: numbers(dial) }),
    ...(corners === undefined ? {} : { corners }),
  };
  const parsed = parseWire(askedScreening, {
    lamps: { all: true },
    dimmers: { all: true },
    ...(counts === undefined ? {} : { counts: numbers(counts) }),
    mains: { voltage_V, frequency_Hz },
    ...(Object.keys(options).length === 0 ? {} : { options }),
  });
  if (parsed.ok) return parsed.value;
  return parsed.issues.map(({ path, message }) => `${optionOf(path)} ${message}`);
}

/** NaN for what is no number: the schema says what would be right. */
function numbers(list: string): number[] {
  return list.split(',').map((text) => (text.trim() === '' ? Number.NaN : Number(text)));
}

function optionOf(path: string): string {
  if (path.startsWith('mains')) return '--mains';
  if (path.startsWith('counts')) return '--counts';
  return path.startsWith('options.corners') ? '--corners' : '--dial';
}
