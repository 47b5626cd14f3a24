import { describe, expect, it } from 'vitest';
import { csvText } from '../../server/verdicts/verdict-csv.ts';

describe('a CSV', () => {
  it.each(['=1+1', '+1', '-1', '@SUM(A1)', '\t=1', ' =1', '\r=1', '\n=1', '＝1', '＋1', '－1', '＠x'])(
    'puts a quote before text that a spreadsheet would run: %j',
    (text) => {
      const csv = csvText(['text'], [{ text }]);
      expect(csv.replaceAll('"', '')).toBe(`text\r\n'${text}\r\n`);
    },
  );

  it.each([-1.5, 0, 12, 1e-7])('leaves the number %d as it is', (number) => {
    expect(csvText(['number'], [{ number }])).toBe(`number\r\n${number}\r\n`);
  });

  it('leaves other text as it is, quotes what needs it, and has nothing for null', () => {
    expect(csvText(['a', 'b', 'c'], [{ a: 'x=1, "y"', b: 'two\nlines', c: null }])).toBe('a,b,c\r\n"x=1, ""y""","two\nlines",\r\n');
  });
});
