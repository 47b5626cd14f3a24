/**
 * Finds fields that an object of a JSON text names more than once. JSON.parse keeps the last of them in silence, so a value that was
 * typed twice and mended once would be judged as whichever came later.
 */
import { type Issue, wirePath } from '../schemas/wire-parsing.ts';

const TOKEN = /"(?:[^"\\]|\\.)*"|[{}[\]:,]/g;

interface Open {
  /** names so far; undefined in a list */
  readonly names: Set<string> | undefined;
  /** name or index of what is being read */
  at: PropertyKey;
}

/** `text` is JSON: what JSON.parse refuses is not asked. */
export function repeatedFields(text: string): readonly Issue[] {
  const open: Open[] = [];
  const repeated: Issue[] = [];
  let latest = '';
  for (const [token] of text.matchAll(TOKEN)) {
    const around = open[open.length - 1];
    if (token === '{') open.push({ names: new Set(), at: '' });
    else if (token === '[') open.push({ names: undefined, at: 0 });
    else if (token === '}' || token === ']') open.pop();
    else if (token === ',' && typeof around?.at === 'number') around.at += 1;
    else if (token === ':' && around?.names !== undefined) {
      around.at = nameIn(latest);
      if (around.names.has(around.at)) repeated.push({ path: wirePath(open.map(({ at }) => at)), message: MESSAGE });
      around.names.add(around.at);
    } else latest = token;
  }
  return repeated;
}

const MESSAGE = 'is given twice: an object names a field once';

function nameIn(quoted: string): string {
  return quoted.includes('\\') ? (JSON.parse(quoted) as string) : quoted.slice(1, -1);
}
