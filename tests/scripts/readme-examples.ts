/**
 * The README's examples: a shell block with one command, followed by a block with what it answers. Commands without an answer are not
 * examples. An answer in JSON may leave fields out, at the top; what it shows must be so.
 */
import { spawn } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { text } from 'node:stream/consumers';
import { ROOT } from './judge-run.ts';

export const README = `${ROOT}README.md`;

export interface ReadmeExample {
  readonly command: string;
  readonly language: 'json' | 'text';
  readonly answer: string;
  /** where the answer stands in the README */
  readonly from: number;
  readonly to: number;
}

export function readmeExamples(readme: string): ReadmeExample[] {
  const blocks = [...readme.matchAll(/^```(\w+)\n([\s\S]*?)^```$/gm)].map(([whole, language = '', content = ''], index, all) => {
    const from = (all[index]?.index ?? 0) + `\`\`\`${language}\n`.length;
    return { language, content, from, to: from + content.length, end: from - language.length - 4 + whole.length };
  });
  return blocks.flatMap((block, index) => {
    const next = blocks[index + 1];
    if (block.language !== 'sh' || next === undefined || (next.language !== 'json' && next.language !== 'text')) return [];
    return [{ command: block.content.trim(), language: next.language, answer: next.content, from: next.from, to: next.to }];
  });
}

/** What the command prints; the service that is running stands in for the README's address. */
export async function answerTo(command: string, address: string): Promise<string> {
  const post = /^curl -s http:\/\/127\.0\.0\.1:8080(\S+) -H 'content-type: application\/json' -d @(\S+)$/.exec(command);
  // Not every machine that tests has curl.
  if (post !== null) {
    const [, path = '', file = ''] = post;
    const headers = { 'content-type': 'application/json' };
    const reply = await fetch(address + path, { method: 'POST', headers, body: readFileSync(ROOT + file) });
    return reply.text();
  }
  if (command.includes('127.0.0.1')) throw new Error(`This test does not know how to ask: ${command}`);
  const child = spawn('sh', ['-c', command], { cwd: ROOT, stdio: ['ignore', 'pipe', 'inherit'] });
  return text(child.stdout);
}

/** The fields of an answer in JSON that the README shows, as it would show them. */
export function shownOf(answer: string, shown: string): string {
  const whole = JSON.parse(answer) as { readonly [field: string]: unknown };
  const fields = Object.keys(JSON.parse(shown) as object);
  const text = JSON.stringify(Object.fromEntries(fields.map((field) => [field, whole[field]])), null, 2);
  // a range stays on one line
  return `${text.replaceAll(/\[\s+(-?[\d.]+),\s+(-?[\d.]+)\s+\]/g, '[$1, $2]')}\n`;
}
