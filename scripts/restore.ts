/**
 * Puts a backup in the record's place: `npm run restore -- FILE`. Ends with 0 when the record is restored and checked, with 1 when it
 * is not, with 2 when it was called wrong.
 */
import { restoreRecord } from '../db/restore.ts';
import { readRecordArguments, rowsInWords } from './record-arguments.ts';

const USAGE = `Usage: npm run restore -- FILE

Puts the contents of FILE, a backup, in the place of the record (holdfast.sqlite
in HOLDFAST_DATA, ./data unless set). Stop the service first: while any process
has the record open, nothing is changed. What was in the record is kept beside
it, in a file whose name ends in the time of the restore.
`;

const asked = readRecordArguments('restore', USAGE);
if (!asked.ok) {
  (asked.asked ? process.stdout : process.stderr).write(asked.text);
  process.exitCode = asked.asked ? 0 : 2;
} else {
  try {
    const result = await restoreRecord(asked.file, asked.recordFile, () => new Date());
    if (!result.ok) refuse(result.problem);
    else {
      console.log(`${asked.recordFile} holds the backup, checked: ${rowsInWords(result.rows)}.`);
      if (result.replaced !== undefined) console.log(`What it replaced is in ${result.replaced}.`);
    }
  } catch (error) {
    refuse(error instanceof Error ? error.message : String(error));
  }
}

function refuse(problem: string): void {
  console.error(`restore: ${problem}`);
  process.exitCode = 1;
}
