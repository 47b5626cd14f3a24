/** Figures as answers show them. */

/**
 * Seven significant digits and no less than a millionth of the wire's unit: finer than the model's accuracy, short enough to read, and
 * the rounding noise of a symmetrical circuit reads as the 0 it is.
 */
export function shown(value: number): number {
  return Number(Number(value.toPrecision(7)).toFixed(6));
}

export const shownOrNull = (value: number | null): number | null => (value === null ? null : shown(value));

/** a share as a percentage */
export const percentOrNull = (share: number | null): number | null => (share === null ? null : shown(share * 100));
