/** Content negotiation: which of the offered media types an Accept header likes best (RFC 9110, 12.5.1). */

interface Range {
  readonly type: string;
  readonly quality: number;
}

/** The most liked of `offered`, the earlier one on a tie; undefined where none is accepted. */
export function acceptedType<const T extends string>(accept: string | undefined, offered: readonly T[]): T | undefined {
  if (accept === undefined || accept.trim() === '') return offered[0];
  const ranges = accept.split(',').map(readRange);
  const liked = offered.map((type) => ({ type, quality: qualityOf(type, ranges) })).filter(({ quality }) => quality > 0);
  return liked.sort((a, b) => b.quality - a.quality)[0]?.type;
}

function readRange(text: string): Range {
  const [type = '', ...parameters] = text.split(';').map((part) => part.trim().toLowerCase());
  const quality = parameters.find((parameter) => parameter.startsWith('q='));
  const value = quality === undefined ? 1 : Number(quality.slice(2));
  return { type, quality: Number.isFinite(value) ? Math.min(1, Math.max(0, value)) : 0 };
}

/** The most specific range that matches decides: an exact type, then type/*, then any. */
function qualityOf(type: string, ranges: readonly Range[]): number {
  const [main] = type.split('/');
  for (const wanted of [type, `${main}/*`, '*/*']) {
    const range = ranges.find((candidate) => candidate.type === wanted);
    if (range !== undefined) return range.quality;
  }
  return 0;
}
