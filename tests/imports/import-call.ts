/** Sends a list to a test's application and reads the lines of the answer back. */
import type { App } from '../../server/app.ts';
import { type ImportedRow, type ImportSummary, importedRow, importSummary } from '../../server/schemas/import-calls.ts';

export interface Imported {
  readonly rows: readonly ImportedRow[];
  readonly summary: ImportSummary;
}

interface Sending {
  readonly kind?: 'lamps' | 'dimmers';
  readonly type?: string;
  readonly query?: string;
}

export async function sendList(app: App, list: string | Buffer, { kind = 'lamps', type = 'text/csv', query = '' }: Sending = {}) {
  return app.inject({ method: 'POST', url: `/v1/imports/${kind}${query}`, headers: { 'content-type': type }, payload: list });
}

/** The answer of a list that was taken in; each line is held against its schema, so that a test sees what clients are told to expect. */
export async function importList(app: App, list: string | Buffer, sending: Sending = {}): Promise<Imported> {
  const answer = await sendList(app, list, sending);
  if (answer.statusCode !== 200) throw new Error(`${answer.statusCode} ${answer.body}`);
  return readReport(answer.body);
}

export function readReport(body: string): Imported {
  const lines = body.trimEnd().split('\n');
  const rows = lines.slice(0, -1).map((line) => importedRow.strict().parse(JSON.parse(line)));
  return { rows, summary: importSummary.strict().parse(JSON.parse(lines.at(-1) ?? '')).summary };
}

/** `2 created`, `3 refused id` and so on, with the paths of what is wrong: short enough to compare whole answers. */
export function outcomes({ rows }: Imported): readonly string[] {
  return rows.map(({ row, outcome, issues = [] }) => [row, outcome, ...issues.map(({ path }) => path)].join(' ').trimEnd());
}
