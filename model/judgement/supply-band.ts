/** Between which voltages the mains may lie: the band of the supply's standard, unless the caller states another. */
import type { Mains } from '../pairing.ts';
import type { SupplyBand } from '../verdict.ts';

const EUROPEAN: SupplyBand = { low: 0.9, high: 1.1, source: 'EN 50160: 10-minute means within +-10 % for 95 % of a week' };
const OTHER: SupplyBand = { low: 0.9, high: 1.1, source: 'IEC 60038: +-10 % (from memory)' };

export function supplyBand(mains: Mains): SupplyBand {
  return mains.frequency < 55 && mains.voltage >= 180 ? EUROPEAN : OTHER;
}
