/** Holds the README to what really happens. `REFRESH_README=1` writes the answers of this run into it instead. */
import { readFileSync, writeFileSync } from 'node:fs';
import { describe, expect, it, onTestFinished } from 'vitest';
import { startService } from '../../scripts/service-process.ts';
import { temporaryFolder } from '../support/server-temporary-record.ts';
import { answerTo, README, readmeExamples, shownOf } from './readme-examples.ts';

const readme = readFileSync(README, 'utf8');

async function service(): Promise<string> {
  const { address, stop } = await startService(temporaryFolder());
  onTestFinished(async () => expect(await stop()).toBe(0));
  return address;
}

describe('the README', () => {
  it('names the two commands by which it is started and tested', () => {
    expect(readme).toContain('\nnpm ci && npm start\n');
    expect(readme).toContain('\nnpm ci && npm test\n');
  });

  it('shows what its examples answer when they are run', async () => {
    const examples = readmeExamples(readme);
    expect(examples.map(({ language }) => language)).toEqual(['json', 'text', 'text', 'text', 'text', 'text']);
    const address = await service();
    let refreshed = readme;
    for (const { command, language, answer, from, to } of examples.toReversed()) {
      const given = await answerTo(command, address);
      const real = language === 'json' ? shownOf(given, answer) : given;
      if (process.env.REFRESH_README === '1') refreshed = refreshed.slice(0, from) + real + refreshed.slice(to);
      else expect(answer, command).toBe(real);
    }
    if (refreshed !== readme) writeFileSync(README, refreshed);
  });

  it('names examples and files that are there', () => {
    const named = [...readme.matchAll(/`([a-z-]+\.json)`/g)].map(([, name]) => name);
    expect(named.length).toBeGreaterThan(4);
    for (const name of named) expect(() => readFileSync(new URL(`../../scripts/examples/${name}`, import.meta.url))).not.toThrow();
    for (const [, link] of readme.matchAll(/\]\(([^)#]+)\)/g))
      expect(() => readFileSync(new URL(`../../${link}`, import.meta.url))).not.toThrow();
  });
});
