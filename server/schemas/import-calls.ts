/** Parameters and answers of the calls that import lists: how a list is taken, and the lines that say what became of each row. */
import { z } from 'zod';
import { choiceOf } from './url-values.ts';

function choiceText<const V extends readonly [string, ...string[]]>(values: V, description: string) {
  return z.enum(values, { error: `${choiceOf(values)}, given once` }).describe(description);
}

export const importQuery = z.strictObject({
  onError: choiceText(
    ['skip', 'stop'],
    'skip: a row that is refused is left out, the others are kept. stop: the first row that is refused ends it, and nothing of the list is kept. Default skip.',
  ).default('skip'),
  dryRun: choiceText(['true', 'false'], 'true: says what would become of each row, and keeps nothing. Default false.').default('false'),
  decimal: choiceText(
    ['point', 'comma'],
    'Decimal mark of a CSV list. Default: the point where commas separate the cells; otherwise the mark of the first number that can be read in only one way.',
  ).optional(),
});

const rowField = z
  .int()
  .min(1)
  .describe('The row as the list’s writer counts: in CSV the header is 1, in NDJSON the line, in a JSON array the element from 1.');
const count = z.int().min(0);

export const importedRow = z
  .object({
    row: rowField,
    id: z.string().nullable().describe('The entry’s id; null where it could not be read.'),
    outcome: z
      .enum(['created', 'revised', 'unchanged', 'refused', 'not-kept'])
      .describe('not-kept: nothing is wrong with the row, but a later one stopped the import.'),
    issues: z
      .array(z.object({ path: z.string(), message: z.string() }))
      .optional()
      .describe('Why it was refused: where the row is wrong, and what would be right.'),
  })
  .meta({ id: 'ImportedRow', description: 'What became of one row.' });

export const importSummary = z
  .object({
    summary: z.object({
      rows: count.describe('Rows with something in them, the header not among them, as far as the list was read.'),
      created: count,
      revised: count,
      unchanged: count,
      refused: count,
      notKept: count,
      kept: z
        .boolean()
        .describe('Whether the catalogue holds what the rows above say: false after a dry run, and where the import stopped.'),
      dryRun: z.boolean(),
      stoppedAtRow: rowField.nullable().describe('The row that stopped the import; null where none did.'),
    }),
  })
  .meta({ id: 'ImportSummary', description: 'The last line. Without it the answer is not whole.' });

export type ImportedRow = z.output<typeof importedRow>;
export type ImportSummary = z.output<typeof importSummary>['summary'];
