/**
 * Backs the record up, also while the service runs: `npm run backup -- FILE`. Ends with 0 when the backup is written and checked, with
 * 1 when there is none, with 2 when it was called wrong.
 */
import { backUpRecord } from '../db/backup.ts';
import { readRecordArguments, rowsInWords } from './record-arguments.ts';

const USAGE = `Usage: npm run backup -- FILE

Copies the record (holdfast.sqlite in HOLDFAST_DATA, ./data unless set) into
FILE, which must not exist. The service may be running. The copy is checked
before it gets its name: what exists under FILE is a whole backup.
`;

const asked = readRecordArguments('backup', USAGE);
if (!asked.ok) {
  (asked.asked ? process.stdout : process.stderr).write(asked.text);
  process.exitCode = asked.asked ? 0 : 2;
} else {
  try {
    const result = await backUpRecord(asked.recordFile, asked.file);
    if (result.ok) console.log(`${asked.file} holds the record, checked: ${rowsInWords(result.rows)}.`);
    else refuse(result.problem);
  } catch (error) {
    refuse(error instanceof Error ? error.message : String(error));
  }
}

function refuse(problem: string): void {
  console.error(`backup: ${problem}`);
  process.exitCode = 1;
}
