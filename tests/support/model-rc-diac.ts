/**
 * Closed form of resistor-capacitor-diac timing from a stiff sine: Vc = A sin(x - phi) + (Vc0 + A sin phi) exp(-x/(wRC)) with
 * A = Vp/sqrt(1 + (wRC)^2), phi = atan(wRC), from the zero crossing on; after a firing the capacitor decays through R with 0 V across
 * the triac until the line reverses. Angles in degrees.
 */
const RADIAN = Math.PI / 180;

export interface RcDiac {
  /** V, peak of the sine */
  readonly peak: number;
  /** wRC */
  readonly slowness: number;
}

/** first angle at which the capacitor, at `start` V when the line crosses zero, reaches `breakover`; null where it does not */
export function firingAngle({ peak, slowness }: RcDiac, breakover: number, start: number): number | null {
  const amplitude = peak / Math.hypot(1, slowness);
  const lag = Math.atan(slowness);
  const voltage = (x: number): number => amplitude * Math.sin(x - lag) + (start + amplitude * Math.sin(lag)) * Math.exp(-x / slowness);
  const step = Math.PI / 18_000;
  for (let before = 0; before < Math.PI; before += step) {
    if (voltage(before + step) < breakover) continue;
    let [low, high] = [before, before + step];
    for (let k = 0; k < 60; k++) {
      const middle = (low + high) / 2;
      if (voltage(middle) < breakover) low = middle;
      else high = middle;
    }
    return high / RADIAN;
  }
  return null;
}

/** settled firing angles of both polarities, each fired at its breakover and dumped to its end; null where one goes out */
export function settledAngles(
  circuit: RcDiac,
  breakover: readonly [number, number],
  end: readonly [number, number],
): [number, number] | null {
  let angles: [number, number] = [90, 90];
  for (let k = 0; k < 400; k++) {
    const decayed = (which: 0 | 1): number => -end[which] * Math.exp((-(180 - angles[which]) * RADIAN) / circuit.slowness);
    const first = firingAngle(circuit, breakover[0], decayed(1));
    if (first === null) return null;
    angles = [first, angles[1]];
    const second = firingAngle(circuit, breakover[1], decayed(0));
    if (second === null) return null;
    angles = [first, second];
  }
  return angles;
}
