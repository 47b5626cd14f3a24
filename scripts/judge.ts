/**
 * Judges one pairing from a file or standard input and prints the verdict: `npm run judge -- FILE.json`. Runs in this process, without
 * a server and without a record. Ends with 0 where a verdict was given, whatever its grade, and with 2 where none could be.
 */
import { parseArgs } from 'node:util';
import { judgeInProcess } from './in-process-judging.ts';
import { readPairing } from './pairing-reading.ts';
import { terminalReport } from './terminal-report.ts';
import { painted, plain, wantsColour, wrap } from './terminal-text.ts';

const USAGE = `Usage: npm run judge -- [--json] FILE.json

Says whether the lamps of a pairing run steadily on its dimmer.

  FILE.json  the pairing, as POST /v1/verdicts takes it; - reads standard input
  --json     print the whole verdict as JSON instead of a report
  --help     print this

Try one of the pairings in scripts/examples/. Colour is used in a terminal,
unless NO_COLOR is set. Ends with 0 when a verdict is printed, with 2 when the
file cannot be read or judged.
`;

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
  const judging = await judgeInProcess(reading.pairing, new Date());
  if (!judging.ok) return complain(judging.complaint);
  const paint = wantsColour(process.stdout.isTTY === true, process.env) ? painted : plain;
  print(asked.json ? `${JSON.stringify(judging.verdict, null, 2)}\n` : terminalReport(judging.verdict, paint));
}

type Arguments =
  | { readonly ok: true; readonly help: boolean; readonly json: boolean; readonly source: string }
  | { readonly ok: false; readonly message: string };

function readArguments(): Arguments {
  try {
    const { values, positionals } = parseArgs({
      options: { json: { type: 'boolean', default: false }, help: { type: 'boolean', short: 'h', default: false } },
      allowPositionals: true,
    });
    const [source, ...more] = positionals;
    if (values.help) return { ok: true, help: true, json: false, source: '' };
    if (source === undefined) return { ok: false, message: 'name the file that holds the pairing, or - for standard input' };
    if (more.length > 0) return { ok: false, message: `one file at a time; these are ${positionals.length}: ${positionals.join(' ')}` };
    return { ok: true, help: false, json: values.json, source };
  } catch (error) {
    if (!(error instanceof TypeError)) throw error;
    // the first sentence says it; the rest is about file names that begin with a dash
    return { ok: false, message: error.message.split('. ')[0] ?? error.message };
  }
}

function print(text: string): void {
  process.stdout.write(text);
}

function complain([heading, ...particulars]: readonly string[], more = ''): void {
  const lines = [`judge: ${heading}`, ...particulars.flatMap((line) => wrap(line, '  '))];
  process.stderr.write(`${lines.join('\n')}\n${more}`);
  process.exitCode = NOT_JUDGED;
}
