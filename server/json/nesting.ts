/**
 * Says whether a text nests its brackets beyond a depth, reading no further than there. Asked before JSON.parse, which takes seconds over
 * megabytes of brackets, during which nobody else is answered.
 */

const QUOTE = 34;
const BACKSLASH = 92;
const OPENING = new Set([91, 123]);
const CLOSING = new Set([93, 125]);

export function nestsDeeperThan(limit: number, text: string): boolean {
  let depth = 0;
  for (let at = 0; at < text.length; at += 1) {
    const code = text.charCodeAt(at);
    if (code === QUOTE) {
      at = endOfText(text, at);
    } else if (OPENING.has(code)) {
      depth += 1;
      if (depth > limit) return true;
    } else if (CLOSING.has(code)) {
      depth -= 1;
    }
  }
  return false;
}

/** Where the quoted text that begins at `from` ends: at its closing quote, or with the text. */
function endOfText(text: string, from: number): number {
  let at = text.indexOf('"', from + 1);
  while (at !== -1 && isEscaped(text, at)) at = text.indexOf('"', at + 1);
  return at === -1 ? text.length : at;
}

function isEscaped(text: string, quote: number): boolean {
  let from = quote;
  while (text.charCodeAt(from - 1) === BACKSLASH) from -= 1;
  return (quote - from) % 2 === 1;
}
