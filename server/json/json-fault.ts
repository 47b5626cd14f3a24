/**
 * Finds the first place where a text stops being JSON and says what would be right there. Asked only once JSON.parse has refused the
 * text: the engine's own message names no place for many faults.
 */

export interface JsonFault {
  /** counted from 1 */
  readonly line: number;
  readonly column: number;
  readonly expected: string;
  readonly found: string;
}

const SPACE = /[ \t\n\r]*/y;
// biome-ignore lint/suspicious/noControlCharactersInRegex: exactly the characters that JSON keeps out of a text
const TEXT = /"(?:[^"\\\u0000-\u001f]|\\(?:["\\/bfnrt]|u[0-9a-fA-F]{4}))*"/y;
const SCALAR = /(?:-?(?:0|[1-9]\d*)(?:\.\d+)?(?:[eE][+-]?\d+)?|true|false|null)(?![\w.+-])/y;

type Awaited = 'value' | 'value or ]' | 'name' | 'name or }' | 'colon' | 'comma or end' | 'nothing';

const EXPECTED: { readonly [awaited in Awaited]: string } = {
  value: 'a value: an object, a list, a "text", a number, true, false or null',
  'value or ]': 'a value or ]',
  name: 'a field name in double quotes (no comma goes after the last field)',
  'name or }': 'a field name in double quotes, or }',
  colon: 'a colon after the field name',
  'comma or end': 'a comma, or the bracket that closes this',
  nothing: 'the end of the text',
};
const OPEN_TEXT = 'a text closed by a double quote on the same line, with only JSON\'s \\ escapes (\\" \\\\ \\n and so on)';

/** The same in words; null where the text is JSON after all. */
export function jsonFaultWords(text: string): string | null {
  const fault = findJsonFault(text);
  return fault === null ? null : `line ${fault.line}, column ${fault.column}: expected ${fault.expected}; found ${fault.found}`;
}

export function findJsonFault(text: string): JsonFault | null {
  const open: ('{' | '[')[] = [];
  let awaited = 'value' as Awaited;
  let at = 0;
  const take = (pattern: RegExp): boolean => {
    pattern.lastIndex = at;
    if (!pattern.test(text)) return false;
    at = pattern.lastIndex;
    return true;
  };
  const afterValue = (): Awaited => (open.length === 0 ? 'nothing' : 'comma or end');
  const close = (bracket: string): boolean => {
    if (bracket !== (open[open.length - 1] === '{' ? '}' : ']')) return false;
    open.pop();
    at += 1;
    awaited = afterValue();
    return true;
  };
  /** takes what comes next, if it is what is awaited */
  const advance = (next: string): boolean => {
    switch (awaited) {
      case 'value or ]':
      case 'value':
        if (awaited === 'value or ]' && next === ']') return close(next);
        if (next === '{' || next === '[') {
          open.push(next);
          at += 1;
          awaited = next === '{' ? 'name or }' : 'value or ]';
          return true;
        }
        if (!take(TEXT) && !take(SCALAR)) return false;
        awaited = afterValue();
        return true;
      case 'name or }':
      case 'name':
        if (awaited === 'name or }' && next === '}') return close(next);
        if (!take(TEXT)) return false;
        awaited = 'colon';
        return true;
      case 'colon':
        if (next !== ':') return false;
        at += 1;
        awaited = 'value';
        return true;
      case 'comma or end':
        if (next !== ',') return close(next);
        at += 1;
        awaited = open[open.length - 1] === '{' ? 'name' : 'value';
        return true;
      case 'nothing':
        return false;
    }
  };

  for (;;) {
    take(SPACE);
    const next = text.charAt(at);
    if (next === '' && awaited === 'nothing') return null;
    if (next === '' || !advance(next)) return faultAt(text, at, awaited);
  }
}

function faultAt(text: string, at: number, awaited: Awaited): JsonFault {
  const before = text.slice(0, at).split('\n');
  const opensText = text.charAt(at) === '"' && (awaited.startsWith('value') || awaited.startsWith('name'));
  return {
    line: before.length,
    column: (before[before.length - 1]?.length ?? 0) + 1,
    expected: opensText ? OPEN_TEXT : EXPECTED[awaited],
    found: foundAt(text, at),
  };
}

function foundAt(text: string, at: number): string {
  if (at >= text.length) return 'the end of the text';
  const rest = /^[^\n\r]{1,24}/.exec(text.slice(at))?.[0] ?? '';
  return JSON.stringify(rest.trimEnd());
}
