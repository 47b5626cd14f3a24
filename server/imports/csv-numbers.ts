/**
 * Reads numbers as spreadsheets write them: with a decimal point or, over much of Europe, a decimal comma. Where a number could mean
 * two things a thousandfold apart (1.234 with a point for the decimals, or for the thousands) it is refused and not guessed.
 */

export type DecimalMark = 'point' | 'comma';

/** What is known of a file's decimal mark; learned from its first number that can be read in only one way. */
export interface DecimalStyle {
  mark: DecimalMark | undefined;
  /** where it was learned: a phrase for messages */
  from: string;
}

export type NumberReading = { readonly ok: true; readonly number: number } | { readonly ok: false; readonly message: string };

const NUMBER = /^([+-]?)(\d+)(?:([.,])(\d+))?(e[+-]?\d{1,3})?$/i;
/** 1.234 and 12,500, but neither 0.123 nor 1234.567 */
const GROUPED = /^[1-9]\d{0,2}$/;

export function readNumber(text: string, style: DecimalStyle, row: number): NumberReading {
  const [, sign = '', whole = '', written, decimals = '', exponent = ''] = NUMBER.exec(text) ?? [];
  if (whole === '') return { ok: false, message: `is ${quoted(text)}, which is not a number` };
  if (written === undefined) return finite(Number(text), text);
  const mark: DecimalMark = written === '.' ? 'point' : 'comma';
  const grouped = exponent === '' && decimals.length === 3 && GROUPED.test(whole);
  if (style.mark === undefined) {
    if (grouped) {
      const message = `is ${quoted(text)}, which can be read as ${whole}.${decimals} and as ${whole}${decimals}: write it without a mark, or say decimal=point or decimal=comma in the address`;
      return { ok: false, message };
    }
    style.mark = mark;
    style.from = `row ${row}`;
  }
  if (mark !== style.mark) {
    return { ok: false, message: `is ${quoted(text)}, with a ${mark}, where the decimal mark is a ${style.mark} (${style.from})` };
  }
  return finite(Number(`${sign}${whole}.${decimals}${exponent}`), text);
}

function finite(number: number, text: string): NumberReading {
  return Number.isFinite(number) ? { ok: true, number } : { ok: false, message: `is ${quoted(text)}, which is beyond any number here` };
}

const SHOWN = 40;

/** What was sent, as far as it helps to find it. */
export function quoted(text: string): string {
  return JSON.stringify(text.length > SHOWN ? `${text.slice(0, SHOWN)}…` : text);
}
