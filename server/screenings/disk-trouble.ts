/** Which errors of the record mean that it cannot be written now, and will be when somebody makes room: nothing is wrong with the data. */

const TROUBLES: readonly RegExp[] = [
  /^SQLITE_FULL$/,
  /^SQLITE_IOERR/,
  /^SQLITE_READONLY/,
  /^SQLITE_CANTOPEN/,
  /^SQLITE_BUSY/,
  /^ENOSPC$/,
  /^EDQUOT$/,
];

/** What the trouble is, in a sentence; undefined where the error is something else. */
export function diskTrouble(error: unknown): string | undefined {
  const code = error instanceof Error && 'code' in error ? String(error.code) : '';
  if (!TROUBLES.some((trouble) => trouble.test(code))) return undefined;
  return code === 'SQLITE_FULL' || code === 'ENOSPC'
    ? 'The disk that holds the record is full.'
    : `The record cannot be written (${code}).`;
}
