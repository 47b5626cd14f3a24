/**
 * Finds columns whose tops were cut off by the end of a scope's range: runs of samples at the extreme value that are longer than a
 * crest's own and carry no noise, although the rest of the column does. Where nothing carries noise, a flat top that does not sit on
 * the mains' crest is clipped too: a lamp that regulates its current is flat about the crest.
 */
import type { Fundamental } from './fundamental.ts';
import type { ScopeFailure } from './profile-failures.ts';
import { CLIP_EDGE, CLIP_EDGE_STEPS, CLIP_FACTOR, CLIP_NOISE_STEPS, CLIP_OFF_CREST, CLIP_SAMPLES } from './profile-tolerances.ts';

interface Run {
  readonly from: number;
  readonly length: number;
}

/** runs of samples at the largest (or, with sign -1, smallest) value */
function extremeRuns(values: ArrayLike<number>, sign: 1 | -1): Run[] {
  let most = Number.NEGATIVE_INFINITY;
  for (let k = 0; k < values.length; k++) most = Math.max(most, sign * (values[k] as number));
  const runs: Run[] = [];
  let from = -1;
  for (let k = 0; k <= values.length; k++) {
    const at = k < values.length && sign * (values[k] as number) === most;
    if (at && from < 0) from = k;
    if (!at && from >= 0) {
      runs.push({ from, length: k - from });
      from = -1;
    }
  }
  return runs;
}

/** the smallest step between two samples' values: a scope's resolution, or next to nothing for computed values */
function resolution(values: ArrayLike<number>): number {
  let least = Number.POSITIVE_INFINITY;
  for (let k = 1; k < values.length; k++) {
    const difference = Math.abs((values[k] as number) - (values[k - 1] as number));
    if (difference > 0 && difference < least) least = difference;
  }
  return Number.isFinite(least) ? least : 0;
}

/** how much neighbours outside of the runs typically differ */
function typicalDifference(values: ArrayLike<number>, runs: readonly Run[]): number {
  const inside = new Uint8Array(values.length);
  for (const run of runs) inside.fill(1, run.from, run.from + run.length);
  const differences: number[] = [];
  for (let k = 1; k < values.length; k++) {
    if (inside[k] === 0 && inside[k - 1] === 0) differences.push(Math.abs((values[k] as number) - (values[k - 1] as number)));
  }
  return Float64Array.from(differences).sort()[Math.floor(differences.length / 2)] ?? 0;
}

function phaseOf(sample: number, step: number, { frequency, phase }: Fundamental): number {
  const turns = frequency * step * sample + phase / (2 * Math.PI);
  return (360 * (turns - Math.floor(turns))) % 180;
}

function isClipped(values: ArrayLike<number>, crest: number, step: number, fundamental: Fundamental, isSine: boolean): boolean {
  // the ends of a record may cut a run short
  const runs = ([1, -1] as const)
    .flatMap((sign) => extremeRuns(values, sign))
    .filter((r) => r.from > 0 && r.from + r.length < values.length);
  const long = runs.filter((r) => r.length >= CLIP_SAMPLES + CLIP_FACTOR * crest);
  if (long.length === 0) return false;
  const finest = resolution(values);
  if (isSine || typicalDifference(values, runs) > CLIP_NOISE_STEPS * finest) return true;
  const edge = Math.ceil(CLIP_EDGE / (fundamental.frequency * step));
  return long.some(({ from, length }) => {
    const level = values[from] as number;
    const leaves = [from - edge, from + length - 1 + edge].every((at) => Math.abs((values[at] ?? 0) - level) > CLIP_EDGE_STEPS * finest);
    return leaves && Math.abs(phaseOf(from + (length - 1) / 2, step, fundamental) - 90) > CLIP_OFF_CREST;
  });
}

export function clippedColumn(
  record: { readonly voltage: ArrayLike<number>; readonly current: ArrayLike<number> },
  step: number,
  fundamental: Fundamental,
): ScopeFailure | null {
  const perPeriod = 1 / (fundamental.frequency * step);
  const share = Math.min(1, resolution(record.voltage) / fundamental.amplitude);
  const crest = (Math.acos(1 - share) / Math.PI) * perPeriod;
  const column = isClipped(record.voltage, crest, step, fundamental, true)
    ? 'voltage'
    : isClipped(record.current, 0, step, fundamental, false)
      ? 'current'
      : null;
  if (column === null) return null;
  const detail = `The ${column} is clipped: it stays at its extreme value for several samples at a stretch. Record it again with a larger range.`;
  return { kind: 'clipped', detail, column };
}
