/** Reads what `npm run backup` and `npm run restore` are told: one file on the command line, the record's folder from the environment. */
import { join } from 'node:path';
import { parseArgs } from 'node:util';
import { parseEnvironment } from '../server/environment.ts';

export type RecordArguments =
  | { readonly ok: true; readonly file: string; readonly recordFile: string }
  /** what to print, and whether it was asked for */
  | { readonly ok: false; readonly text: string; readonly asked: boolean };

export function readRecordArguments(command: string, usage: string): RecordArguments {
  const complain = (message: string): RecordArguments => ({ ok: false, asked: false, text: `${command}: ${message}\n\n${usage}` });
  try {
    const options = { help: { type: 'boolean', short: 'h', default: false } } as const;
    const { values, positionals } = parseArgs({ options, allowPositionals: true });
    const [file, ...more] = positionals;
    if (values.help) return { ok: false, asked: true, text: usage };
    if (file === undefined || file === '') return complain('name the backup file');
    if (more.length > 0) return complain(`one file at a time; these are ${positionals.length}: ${positionals.join(' ')}`);
    const parsed = parseEnvironment(process.env);
    if (!parsed.ok) return complain(parsed.problems.join('; '));
    return { ok: true, file, recordFile: join(parsed.environment.dataFolder, 'holdfast.sqlite') };
  } catch (error) {
    if (!(error instanceof TypeError)) throw error;
    return complain(error.message.split('. ')[0] ?? error.message);
  }
}

/** `1,204 verdicts, 311 entries` */
export function rowsInWords(rows: { readonly [table: string]: number }): string {
  const tables = Object.entries(rows).filter(([table]) => table !== 'migrations');
  return tables.map(([table, count]) => `${count.toLocaleString('en')} ${table.replaceAll('_', ' ')}`).join(', ');
}
