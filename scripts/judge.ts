/**
 * Judges one pairing from a file or standard input and prints the verdict: `npm run judge -- FILE.json`. Runs in this process, without
 * a server and without a record. Ends with 0 where a verdict was given, whatever its grade, and with 2 where none could be.
 */
import { parseArgs } from 'node:util';
import { type AskedPairing, askedPairing } from '../server/schemas/pairing.ts';
import { parseWire } from '../server/schemas/wire-parsing.ts';
import { judgeInProcess } from './in-process-judging.ts';
import { readPairing } from './pairing-reading.ts';
import { terminalReport } from './terminal-report.ts';
import { painted, plain, wantsColour, wrap } from './terminal-text.ts';

const USAGE = `Usage: npm run judge -- [OPTIONS] FILE.json

Says whether the lamps of a pairing run steadily on its dimmer.

  FILE.json      the pairing, as POST /v1/verdicts takes it; - reads standard
                 input
  --remedies     look for what cures it, as options.remedies does
  --counts 1-12  grade these numbers of lamps too, as options.lampCount does
  --requirement  say which latching and holding currents would do
  --json         print the whole verdict as JSON instead of a report
  --help         print this

Try one of the pairings in scripts/examples/. Colour is used in a terminal,
unless NO_COLOR is set. Ends with 0 when a verdict is printed, with 2 when the
file cannot be read or judged.
`;

const FLAGS = {
  json: { type: 'boolean', default: false },
  remedies: { type: 'boolean', default: false },
  counts: { type: 'string' },
  requirement: { type: 'boolean', default: false },
  help: { type: 'boolean', short: 'h', default: false },
} as const;

const NOT_JUDGED = 2;

process.stdout.on('error', (error: NodeJS.ErrnoException) => {
  // Whoever reads has seen enough, as with `| head`.
  if (error.code !== 'EPIPE') throw error;
});
await main();

async function main(): Promise<void> {
  const asked = readArguments();
  if (!asked.ok) return complain([asked.message], `\n${USAGE}`);
  if (asked.help) return print(USAGE);
  const reading = readPairing(asked.source);
  if (!reading.ok) return complain(reading.complaint);
  const pairing = { ...reading.pairing, options: { ...reading.pairing.options, ...asked.options } };
  const judging = await judgeInProcess(pairing, new Date(), asked);
  if (!judging.ok) return complain(judging.complaint);
  const { verdict, requirement } = judging;
  if (asked.json) return print(`${JSON.stringify(requirement === null ? verdict : { ...verdict, requirement }, null, 2)}\n`);
  print(terminalReport(verdict, wantsColour(process.stdout.isTTY === true, process.env) ? painted : plain, requirement));
}

interface Asked {
  readonly json: boolean;
  readonly source: string;
  readonly withRequirement: boolean;
  /** in place of what the file says */
  readonly options: NonNullable<AskedPairing['options']>;
}

type Arguments =
  | ({ readonly ok: true; readonly help: false } & Asked)
  | { readonly ok: true; readonly help: true }
  | { readonly ok: false; readonly message: string };

function readArguments(): Arguments {
  try {
    const { values, positionals } = parseArgs({ options: FLAGS, allowPositionals: true });
    const [source, ...more] = positionals;
    if (values.help) return { ok: true, help: true };
    if (source === undefined) return { ok: false, message: 'name the file that holds the pairing, or - for standard input' };
    if (more.length > 0) return { ok: false, message: `one file at a time; these are ${positionals.length}: ${positionals.join(' ')}` };
    const counts = values.counts === undefined ? {} : readCounts(values.counts);
    if (typeof counts === 'string') return { ok: false, message: counts };
    const options = { ...(values.remedies ? { remedies: true } : {}), ...counts };
    return { ok: true, help: false, json: values.json, source, withRequirement: values.requirement, options };
  } catch (error) {
    if (!(error instanceof TypeError)) throw error;
    // the first sentence says it; the rest is about file names that begin with a dash
    return { ok: false, message: error.message.split('. ')[0] ?? error.message };
  }
}

/** what is wrong with it, or the option that it stands for */
function readCounts(text: string): string | Pick<Asked['options'], 'lampCount'> {
  const [, from, to] = /^(\d{1,4})-(\d{1,4})$/.exec(text) ?? [];
  if (from === undefined || to === undefined) return `--counts takes two numbers of lamps like 1-12, not ${text}`;
  const parsed = parseWire(askedPairing.shape.options, { lampCount: { from: Number(from), to: Number(to) } });
  return parsed.ok ? { lampCount: parsed.value?.lampCount } : `--counts ${text}: ${parsed.issues.map(({ message }) => message).join('; ')}`;
}

function print(text: string): void {
  process.stdout.write(text);
}

function complain([heading, ...particulars]: readonly string[], more = ''): void {
  const lines = [`judge: ${heading}`, ...particulars.flatMap((line) => wrap(line, '  '))];
  process.stderr.write(`${lines.join('\n')}\n${more}`);
  process.exitCode = NOT_JUDGED;
}
