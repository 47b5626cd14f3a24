/** Compares what the sweep showed, and what the lamps are rated for, with the dimmer's stated ratings. A rating not stated is not checked. */
import type { Pairing } from '../pairing.ts';
import type { DialRow, Reason } from '../verdict.ts';

const round = (value: number, digits: number): string => String(Number(value.toPrecision(digits)));

/** W of all lamps together, null where a lamp states none */
function ratedLoad(pairing: Pairing): number | null {
  let sum = 0;
  for (const { count, lamp } of pairing.lamps) {
    if (lamp.ratedPower === null) return null;
    sum += count * lamp.ratedPower;
  }
  return sum;
}

export function ratingReasons(pairing: Pairing, dial: readonly DialRow[]): Reason[] {
  const { maximumCurrent, maximumPeakCurrent, maximumLoad, minimumLoad } = pairing.dimmer.ratings;
  const reasons: Reason[] = [];
  const rms = Math.max(0, ...dial.map((r) => r.rmsCurrent));
  const peak = Math.max(0, ...dial.map((r) => r.peakCurrent));
  const load = ratedLoad(pairing);
  if (maximumCurrent !== null && rms > maximumCurrent) {
    reasons.push({
      code: 'over-current-rating',
      dial: null,
      detail: `The dimmer carries ${round(rms, 3)} A r.m.s.; it is rated for ${round(maximumCurrent, 3)} A.`,
    });
  }
  if (maximumPeakCurrent !== null && peak > maximumPeakCurrent) {
    reasons.push({
      code: 'over-peak-rating',
      dial: null,
      detail: `Current peaks of ${round(peak, 3)} A pass the dimmer; it is rated for ${round(maximumPeakCurrent, 3)} A.`,
    });
  }
  if (load !== null && maximumLoad !== null && load > maximumLoad) {
    reasons.push({
      code: 'over-load-rating',
      dial: null,
      detail: `The lamps are rated ${round(load, 4)} W together; the dimmer for at most ${round(maximumLoad, 4)} W.`,
    });
  }
  if (load !== null && minimumLoad !== null && load < minimumLoad) {
    reasons.push({
      code: 'under-load-rating',
      dial: null,
      detail: `The lamps are rated ${round(load, 4)} W together; the dimmer's maker asks for at least ${round(minimumLoad, 4)} W.`,
    });
  }
  return reasons;
}
