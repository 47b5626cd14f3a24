/**
 * The corners at which a pairing is judged. Not the full product of mains (3) and currents (4): a triac that needs more current never
 * holds longer, so the cold maximum stands for every smaller current of a heavy demand; but the lamps' own current may grow with the mains
 * (a filament) or shrink (constant power), and a higher mains rings harder, so both ends of the band are taken. Typical currents
 * show what an ordinary specimen does, and ring differently. Tried on 90 random circuits against the product of three mains voltages and
 * three currents: the nominal corner alone missed the product's worst grade 12 times, nominal and the two cold corners once.
 */
import type { Pairing, PerPolarity } from '../pairing.ts';
import type { CornerInputs, JudgeOptions, SupplyBand } from '../verdict.ts';
import { COLD_FACTOR } from './judgement-figures.ts';
import { supplyBand } from './supply-band.ts';

const times = (p: PerPolarity, factor: number): PerPolarity => ({ positive: p.positive * factor, negative: p.negative * factor });
const lesser = (a: PerPolarity, b: PerPolarity): PerPolarity => ({
  positive: Math.min(a.positive, b.positive),
  negative: Math.min(a.negative, b.negative),
});

function nominalCorner({ mains, dimmer }: Pairing): CornerInputs {
  const { latchingCurrent, holdingCurrent } = dimmer;
  return { name: 'nominal', mainsVoltage: mains.voltage, latchingCurrent, holdingCurrent };
}

function coldCorners({ mains, dimmer }: Pairing, band: SupplyBand): CornerInputs[] {
  const latchingCurrent = times(dimmer.latchingCurrent, COLD_FACTOR);
  const holdingCurrent = times(dimmer.holdingCurrent, COLD_FACTOR);
  return [
    { name: 'low-mains-cold', mainsVoltage: mains.voltage * band.low, latchingCurrent, holdingCurrent },
    { name: 'high-mains-cold', mainsVoltage: mains.voltage * band.high, latchingCurrent, holdingCurrent },
  ];
}

function typicalCorners({ mains, dimmer }: Pairing): CornerInputs[] {
  const { typicalLatchingCurrent, typicalHoldingCurrent } = dimmer;
  if (typicalLatchingCurrent === null && typicalHoldingCurrent === null) return [];
  const latchingCurrent = typicalLatchingCurrent ?? dimmer.latchingCurrent;
  // no triac holds at more than it latches, also where only the latching current has a typical value
  const holdingCurrent = lesser(typicalHoldingCurrent ?? dimmer.holdingCurrent, latchingCurrent);
  return [{ name: 'typical-currents', mainsVoltage: mains.voltage, latchingCurrent, holdingCurrent }];
}

/** nominal first */
export function cornersOf(pairing: Pairing, options: Pick<JudgeOptions, 'corners' | 'supplyBand'>): CornerInputs[] {
  if (options.corners === 'nominal') return [nominalCorner(pairing)];
  const band = options.supplyBand ?? supplyBand(pairing.mains);
  return [nominalCorner(pairing), ...coldCorners(pairing, band), ...typicalCorners(pairing)];
}

export function atCorner(pairing: Pairing, corner: CornerInputs): Pairing {
  const { mainsVoltage: voltage, latchingCurrent, holdingCurrent } = corner;
  return { ...pairing, mains: { ...pairing.mains, voltage }, dimmer: { ...pairing.dimmer, latchingCurrent, holdingCurrent } };
}
