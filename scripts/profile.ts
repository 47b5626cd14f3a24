/**
 * Fits a recorded current to a lamp and prints it: `npm run profile -- table.json` or `record.csv`. Runs in this process, without a
 * server. Ends with 0 where a lamp was fitted, and with 2 where none could be.
 */
import { parseArgs } from 'node:util';
import { jsonFaultWords } from '../server/json/json-fault.ts';
import { profileQuestion, profileToWire } from '../server/profiles/profile-question.ts';
import { type Profile, profileRequest } from '../server/schemas/profile.ts';
import { parseWire } from '../server/schemas/wire-parsing.ts';
import { fitProfile } from '../server/simulation/profile-fitting.ts';
import { fitWords, round } from './terminal-lamps.ts';
import { wrap } from './terminal-text.ts';
import { readText } from './text-reading.ts';

const USAGE = `Usage: npm run profile -- [OPTIONS] FILE

Fits a lamp to what it was recorded to draw from undimmed mains.

  FILE                     a phase table or scope record as POST /v1/profiles
                           takes it, in JSON; or a scope's CSV with columns of
                           time, voltage and current; - reads standard input
  --rated-power 8          W; a scope record that disagrees with it is refused
  --series-resistance 22   Ohm before the input capacitor, where it is known
  --minimum-voltage 50     V below which a reservoir's converter stops
  --units ms,V,mA          units of time, voltage and current of a CSV that does
                           not name them
  --columns 0,1,2          places of time, voltage and current in a CSV
  --json                   print the whole answer as JSON
  --help                   print this

Ends with 0 when a lamp is fitted, with 2 when none can be.
`;

const FLAGS = {
  'rated-power': { type: 'string' },
  'series-resistance': { type: 'string' },
  'minimum-voltage': { type: 'string' },
  units: { type: 'string' },
  columns: { type: 'string' },
  json: { type: 'boolean', default: false },
  help: { type: 'boolean', short: 'h', default: false },
} as const;

const NOT_FITTED = 2;

await main();

async function main(): Promise<void> {
  const asked = readArguments();
  if (typeof asked === 'string') return complain([asked], `\n${USAGE}`);
  const { values, source } = asked;
  if (values.help) return print(USAGE);
  const file = readText(source, 'a phase table or a scope record');
  if (!file.ok) return complain(file.complaint);
  const sent = requestOf(file.text, values);
  if (!sent.ok) return complain([`${file.name} is not JSON`, sent.message]);
  const parsed = parseWire(profileRequest, sent.request);
  if (!parsed.ok) {
    const places = parsed.issues.map(({ path, message }) => `${path === '' ? 'the profile' : path} ${message}`);
    return complain([`${file.name} is not a profile that can be fitted`, ...places]);
  }
  const fitted = fitProfile(profileQuestion(parsed.value));
  if (!fitted.ok) {
    const { failure } = fitted;
    return complain(['no lamp was fitted', failure.kind === 'profile-refused' ? failure.failure.detail : JSON.stringify(failure.issues)]);
  }
  const profile = profileToWire(fitted.value);
  print(values.json ? `${JSON.stringify(profile, null, 2)}\n` : report(profile));
}

type Values = ReturnType<typeof parseArgs<{ options: typeof FLAGS }>>['values'];

function readArguments(): { readonly values: Values; readonly source: string } | string {
  try {
    const { values, positionals } = parseArgs({ options: FLAGS, allowPositionals: true });
    const [source, ...more] = positionals;
    if (values.help) return { values, source: '' };
    if (source === undefined) return 'name the file that holds the record, or - for standard input';
    if (more.length > 0) return `one file at a time; these are ${positionals.length}: ${positionals.join(' ')}`;
    return { values, source };
  } catch (error) {
    if (!(error instanceof TypeError)) throw error;
    return error.message.split('. ')[0] ?? error.message;
  }
}

type Request = { readonly ok: true; readonly request: unknown } | { readonly ok: false; readonly message: string };

/** A file that begins like a JSON object is one; anything else is a scope's CSV. What the options say goes before the file. */
function requestOf(text: string, values: Values): Request {
  const stated = {
    ...given('ratedPower_W', values['rated-power'], Number),
    ...given('seriesResistance_Ohm', values['series-resistance'], Number),
    ...given('minimumVoltage_V', values['minimum-voltage'], Number),
  };
  const ofColumns = {
    ...given('units', values.units, (list) => byColumn(list, (unit) => unit)),
    ...given('columns', values.columns, (list) => byColumn(list, Number)),
  };
  if (!text.trimStart().startsWith('{')) return { ok: true, request: { kind: 'scope-record', csv: text, ...ofColumns, ...stated } };
  try {
    return { ok: true, request: { kind: 'phase-table', ...(JSON.parse(text) as object), ...ofColumns, ...stated } };
  } catch (error) {
    if (!(error instanceof SyntaxError)) throw error;
    return { ok: false, message: jsonFaultWords(text) ?? error.message };
  }
}

function given<T>(field: string, text: string | undefined, read: (text: string) => T): object {
  return text === undefined ? {} : { [field]: read(text) };
}

/** what is left out is left to the header */
function byColumn<T>(list: string, read: (text: string) => T): object {
  const [time, voltage, current] = list.split(',').map((part) => part.trim());
  const entries = Object.entries({ time, voltage, current }).filter(([, part]) => part !== undefined && part !== '');
  return Object.fromEntries(entries.map(([column, part]) => [column, read(part as string)]));
}

function report(profile: Profile): string {
  const { recorded, fitted, otherResidual_pct, form, lamp, scope, taken } = profile;
  const means = ({ rmsCurrent_mA, power_W, powerFactor }: Profile['fitted']): string =>
    `${round(rmsCurrent_mA)} mA r.m.s., ${round(power_W)} W, power factor ${round(powerFactor)}`;
  const other = form === 'reservoir' ? 'iv-table' : 'reservoir';
  const lines = [
    ...wrap(fitWords(profile)),
    ...(otherResidual_pct === null ? [] : wrap(`As ${other} it would leave ${round(otherResidual_pct)} %.`, '  ')),
    ...wrap(means(recorded), '  Recorded  '),
    ...wrap(means(fitted), '  Fitted    '),
    ...(scope === null ? [] : scopeLines(scope)),
    '',
    'Not from the record',
    ...taken.flatMap(({ path, basis }) => wrap(`${path}: ${basis}`, '  - ')),
    '',
    'The lamp, for use in a pairing',
    JSON.stringify(lamp, null, 2),
  ];
  return `${lines.join('\n')}\n`;
}

function scopeLines(scope: NonNullable<Profile['scope']>): string[] {
  const read = `${scope.periods} periods of ${round(scope.samplesPerPeriod)} samples at ${round(scope.voltage_V)} V, ${round(scope.frequency_Hz)} Hz`;
  const removed = [
    `${round(scope.voltageOffset_V)} V and ${round(scope.currentOffset_mA)} mA of offset`,
    ...(scope.currentReversed ? ['the current turned round'] : []),
    `${round(scope.noise_mA)} mA r.m.s. of noise`,
  ];
  return [...wrap(read, '  Read      '), ...wrap(removed.join(', '), '  Taken out ')];
}

function print(text: string): void {
  process.stdout.write(text);
}

function complain([heading, ...particulars]: readonly string[], more = ''): void {
  const lines = [`profile: ${heading}`, ...particulars.flatMap((line) => wrap(line, '  '))];
  process.stderr.write(`${lines.join('\n')}\n${more}`);
  process.exitCode = NOT_FITTED;
}
