/** What one dial position does, from its figures: the table of states with its thresholds (their reasons are in tolerances.ts). */
import { polarityLimit, variationLimit } from '../tolerances.ts';
import type { DialRow, DialState } from '../verdict.ts';

export interface DialThresholds {
  /** largest modulation of half-cycle energy within one polarity, and between the polarities, 0..1 */
  readonly variation: number;
  readonly polarityDifference: number;
}

export function thresholdsAt(frequency: number): DialThresholds {
  return { variation: variationLimit(frequency), polarityDifference: polarityLimit(frequency) };
}

type Figures = Pick<DialRow, 'firings' | 'silentShare' | 'earlyDropOuts' | 'polarityDifference' | 'variation'>;

/** every state that holds, most telling first; never empty */
export function dialStates(row: Figures, thresholds: DialThresholds): DialState[] {
  if (row.firings.max === 0) return ['dark'];
  const states: DialState[] = [];
  const once = row.firings.min === 1 && row.firings.max === 1;
  if (row.silentShare > 0) states.push('skipping');
  if (row.firings.max >= 2) states.push('re-firing');
  if (row.earlyDropOuts > 0 && row.firings.max < 2) states.push('dropping-out');
  if (row.polarityDifference > thresholds.polarityDifference) states.push('lopsided');
  if (once && row.variation > thresholds.variation) states.push('wandering');
  return states.length === 0 ? ['steady'] : states;
}
