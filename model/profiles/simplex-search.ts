/** Downhill search without derivatives (Nelder and Mead 1965): the least value of a function of a few unknowns of like size. */

const STEPS = 400;
/** spread of the corners' values, relative, at which the search has ended */
const FLAT = 1e-9;

interface Corner {
  readonly at: readonly number[];
  readonly value: number;
}

export function searchLeast(value: (at: readonly number[]) => number, start: readonly number[], reach: number): Corner {
  const corner = (at: readonly number[]): Corner => ({ at, value: value(at) });
  const n = start.length;
  let corners = [corner(start), ...start.map((_, k) => corner(start.map((x, j) => (j === k ? x + reach : x))))];
  for (let step = 0; step < STEPS; step++) {
    corners = corners.toSorted((a, b) => a.value - b.value);
    const best = corners[0] as Corner;
    const worst = corners[n] as Corner;
    if (worst.value - best.value <= FLAT * Math.abs(best.value)) break;
    const middle = start.map((_, k) => corners.slice(0, n).reduce((sum, c) => sum + (c.at[k] as number), 0) / n);
    const along = (factor: number): Corner => corner(middle.map((m, k) => m + factor * ((worst.at[k] as number) - m)));
    const mirrored = along(-1);
    if (mirrored.value < best.value) {
      const further = along(-2);
      corners[n] = further.value < mirrored.value ? further : mirrored;
    } else if (mirrored.value < (corners[n - 1] as Corner).value) corners[n] = mirrored;
    else {
      const nearer = mirrored.value < worst.value ? along(-0.5) : along(0.5);
      if (nearer.value < Math.min(worst.value, mirrored.value)) corners[n] = nearer;
      else corners = corners.map((c) => (c === best ? c : corner(c.at.map((x, k) => ((best.at[k] as number) + x) / 2))));
    }
  }
  return corners.reduce((a, b) => (b.value < a.value ? b : a));
}
