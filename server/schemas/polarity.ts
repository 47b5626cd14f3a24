/**
 * Values that may differ between the two polarities of the mains: triac currents (with a typical and a maximum value) and the diac's
 * breakover voltage. Short forms stand for equal polarities.
 */
import { z } from 'zod';
import { numberAt, quantity, type Report, valueAt, withRule } from './quantities.ts';

const triacCurrent = (is: string) => quantity('mA', 0.1, 1000, { is });

function currentWithTypical(of: string) {
  const fields = { typical: triacCurrent(`Typical ${of}`), maximum: triacCurrent(`Stated maximum ${of}`) };
  return withRule(z.strictObject(fields), (sent, report) => {
    const typical = numberAt(sent, 'typical');
    const maximum = numberAt(sent, 'maximum');
    if (typical !== undefined && maximum !== undefined && typical > maximum) {
      report(['typical'], `must not be above the maximum (${maximum} mA)`);
    }
  });
}

/** `of` completes "Stated maximum ...". */
export function triacCurrentField(of: string, more: string) {
  const one = z.union([triacCurrent(`Stated maximum ${of}`), currentWithTypical(of)]);
  return z
    .union([triacCurrent(`Stated maximum ${of}`), currentWithTypical(of), z.strictObject({ positive: one, negative: one })])
    .describe(
      `${more} A number is the stated maximum; or give typical and maximum, or each polarity of the main current by itself. 0.1 to 1000 mA.`,
    );
}

export function breakoverField(otherwise: string) {
  const breakover = (is: string) => quantity('V', 5, 200, { is });
  return z
    .union([
      breakover('Breakover voltage of the diac, either polarity'),
      z.strictObject({ positive: breakover('For positive timing voltage'), negative: breakover('For negative timing voltage') }),
    ])
    .describe(`Breakover voltage of the diac, for both polarities or each by itself. 5 to 200 V. ${otherwise}`);
}

export interface PolarityValue {
  readonly typical: number | undefined;
  readonly maximum: number;
}

export const POLARITIES = ['positive', 'negative'] as const;

/** Reads a value of any of the forms above for one polarity; undefined where what was sent has none. */
export function readPolarity(sent: unknown, polarity: (typeof POLARITIES)[number]): PolarityValue | undefined {
  const own = valueAt(sent, polarity) ?? sent;
  const maximum = typeof own === 'number' ? own : numberAt(own, 'maximum');
  if (maximum === undefined || !Number.isFinite(maximum)) return undefined;
  return { typical: numberAt(own, 'typical'), maximum };
}

/** A triac holds at a lower current than it latches at: in both polarities, at the maximum, and where both are given at the typical value. */
export function reportHoldingAboveLatching(sent: unknown, report: Report): void {
  for (const polarity of POLARITIES) {
    const latching = readPolarity(valueAt(sent, 'latchingCurrent_mA'), polarity);
    const holding = readPolarity(valueAt(sent, 'holdingCurrent_mA'), polarity);
    if (latching === undefined || holding === undefined) continue;
    const above =
      holding.maximum > latching.maximum
        ? `the latching current (${latching.maximum} mA)`
        : holding.typical !== undefined && latching.typical !== undefined && holding.typical > latching.typical
          ? `the latching current where both are typical (${latching.typical} mA)`
          : undefined;
    if (above !== undefined) {
      report(['holdingCurrent_mA'], `must not be above ${above}: a triac holds at a lower current than it latches at`);
      return;
    }
  }
}
