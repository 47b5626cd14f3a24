/**
 * Reads a JSON array element by element, without holding more than one of them. It only finds where an element ends: the innermost
 * text in quotes is skipped, brackets are counted, and JSON.parse judges what is in between. A broken array breaks the list.
 */
import type { ImportLimits } from './import-limits.ts';
import { ListRefused } from './list-refused.ts';
import { type ListRow, rowOfJson } from './list-row.ts';

export async function* jsonArrayRows(text: AsyncIterable<string>, limits: ImportLimits): AsyncGenerator<ListRow> {
  const cut = arrayCutter();
  let row = 0;
  for await (const piece of text) {
    for (const element of cut.elements(piece)) {
      row += 1;
      refuseTooLong(element.length, row, limits);
      yield parsed(element, row);
    }
    refuseTooLong(cut.heldLength(), row + 1, limits);
  }
  if (!cut.isClosed()) throw broken(row + 1, 'it ends before its closing bracket');
}

function refuseTooLong(length: number, row: number, { rowLength }: ImportLimits): void {
  if (length > rowLength) throw new ListRefused('list-too-large', `Element ${row} is longer than ${rowLength} characters.`);
}

function parsed(element: string, row: number): ListRow {
  try {
    return rowOfJson(element, row);
  } catch (error) {
    if (!(error instanceof SyntaxError)) throw error;
    throw broken(row, 'an element is not JSON');
  }
}

function broken(row: number, what: string): ListRefused {
  return new ListRefused('unreadable-list', `The list is not a JSON array near element ${row}: ${what}.`);
}

/** before: nothing but space so far. in: between the brackets. after: closed, nothing but space may follow. */
type Place = 'before' | 'in' | 'after';

function arrayCutter() {
  let place: Place = 'before';
  let held = '';
  let depth = 0;
  let inText = false;
  let escaped = false;
  let count = 0;

  /** An empty element is right only in an empty array. */
  const take = (closing: boolean): string | undefined => {
    const element = held;
    held = '';
    if (element.trim() === '') {
      if (closing && count === 0) return undefined;
      throw broken(count + 1, 'an element is missing between two commas, or before the closing bracket');
    }
    count += 1;
    return element;
  };

  function* elements(piece: string): Generator<string> {
    let from = 0;
    for (let at = 0; at < piece.length; at += 1) {
      const character = piece[at] as string;
      if (inText) {
        if (escaped) escaped = false;
        else if (character === '\\') escaped = true;
        else if (character === '"') inText = false;
        continue;
      }
      if (place !== 'in') {
        if (/\s/.test(character)) continue;
        if (place === 'after') throw broken(count, 'something follows its closing bracket');
        if (character !== '[') throw broken(1, 'it must begin with [');
        place = 'in';
        from = at + 1;
        continue;
      }
      if (character === '"') inText = true;
      else if (character === '{' || character === '[') depth += 1;
      else if (depth > 0 && (character === '}' || character === ']')) depth -= 1;
      else if (depth === 0 && (character === ',' || character === ']')) {
        held += piece.slice(from, at);
        from = at + 1;
        if (character === ']') place = 'after';
        const element = take(character === ']');
        if (element !== undefined) yield element;
      }
    }
    if (place === 'in') held += piece.slice(from);
  }

  return { elements, heldLength: () => held.length, isClosed: () => place === 'after' };
}
