import { readFileSync, writeFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { IMPORT_LIMITS } from '../../server/imports/import-limits.ts';
import { testApp } from '../support/server-app.ts';
import { sendList } from './import-call.ts';

const ROOT = new URL('../../', import.meta.url);
const README = new URL('README.md', ROOT);
const EXAMPLE =
  /^curl -s 'http:\/\/127\.0\.0\.1:8080\/v1\/imports\/(lamps)(\?\S+)' -H 'content-type: (\S+)' --data-binary @(\S+)\n```\n\n```ndjson\n([\s\S]*?)^```$/m;

describe('the README’s import', () => {
  // `REFRESH_README=1` writes the answer of this run into it instead.
  it('is answered as shown', async () => {
    const readme = readFileSync(README, 'utf8');
    const [, , query = '', type = '', file = '', shown = ''] = EXAMPLE.exec(readme) ?? [];
    expect(file).not.toBe('');
    const { app } = await testApp();
    const answer = await sendList(app, readFileSync(new URL(file, ROOT)), { query, type });
    expect(answer.statusCode).toBe(200);
    if (process.env.REFRESH_README === '1')
      writeFileSync(
        README,
        readme.replace(`\`\`\`ndjson\n${shown}\`\`\``, () => `\`\`\`ndjson\n${answer.body}\`\`\``),
      );
    else expect(shown).toBe(answer.body);
  });

  it('may be as large as it says', () => {
    const readme = readFileSync(README, 'utf8');
    const { bytes, rows, rowLength } = IMPORT_LIMITS;
    const said = [`${bytes / 2 ** 20} MiB`, `${rows.toLocaleString('en')} rows`, `${rowLength.toLocaleString('en')} characters in a row`];
    for (const limit of said) expect(readme).toContain(limit);
  });
});
