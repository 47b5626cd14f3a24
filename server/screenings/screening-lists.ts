/** Pages of screenings, newest first, with the cursor to the next. */
import type { ScreeningAnswer } from '../schemas/screening.ts';
import { DEFAULT_LIMIT } from '../schemas/url-values.ts';
import type { Screenings } from './screenings.ts';

export type ScreeningPage =
  | { readonly ok: true; readonly items: ScreeningAnswer[]; readonly nextCursor: string | null }
  | { readonly ok: false };

const CURSOR = /^before-([1-9]\d{0,14})$/;

export async function screeningPage(
  screenings: Pick<Screenings, 'page'>,
  query: { readonly limit?: number | undefined; readonly cursor?: string | undefined },
): Promise<ScreeningPage> {
  const before = query.cursor === undefined ? Number.MAX_SAFE_INTEGER : readCursor(query.cursor);
  if (before === undefined) return { ok: false };
  const limit = query.limit ?? DEFAULT_LIMIT;
  // One more than asked for tells whether there is a next page.
  const found = await screenings.page(before, limit + 1);
  const shown = found.slice(0, limit);
  const last = shown.at(-1);
  return {
    ok: true,
    items: shown.map(({ screening }) => screening),
    nextCursor: found.length > limit && last !== undefined ? writeCursor(last.seq) : null,
  };
}

function writeCursor(seq: number): string {
  return Buffer.from(`before-${seq}`).toString('base64url');
}

function readCursor(cursor: string): number | undefined {
  const [, digits] = CURSOR.exec(Buffer.from(cursor, 'base64url').toString('latin1')) ?? [];
  // Decoding is lenient; only what encodes back to the same text was written here.
  return digits !== undefined && writeCursor(Number(digits)) === cursor ? Number(digits) : undefined;
}
