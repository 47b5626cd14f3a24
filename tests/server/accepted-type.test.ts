import { describe, expect, it } from 'vitest';
import { acceptedType } from '../../server/accepted-type.ts';

const OFFERED = ['application/json', 'text/csv'] as const;

describe('content negotiation', () => {
  it.each([
    [undefined, 'application/json'],
    ['', 'application/json'],
    ['*/*', 'application/json'],
    ['text/csv', 'text/csv'],
    ['TEXT/CSV', 'text/csv'],
    ['text/*', 'text/csv'],
    ['text/csv;q=0.4, application/json;q=0.5', 'application/json'],
    ['text/csv; header=present; q=0.9, application/json;q=0.5', 'text/csv'],
    ['*/*;q=0.1, text/csv', 'text/csv'],
    ['application/json;q=0, */*', 'text/csv'],
    ['text/csv;q=0', undefined],
    ['image/png', undefined],
    ['text/csv;q=abc', undefined],
  ])('takes Accept: %s for %s', (accept, expected) => {
    expect(acceptedType(accept, OFFERED)).toBe(expected);
  });
});
