/** Says why a fit leaves too much of a phase table: what is left is split by its symmetry, and the largest share names the reason. */
import { type PhaseTable, pointWeights } from './phase-table.ts';
import { FEWEST_SAMPLES_A_PERIOD, RESIDUAL_LIMIT } from './profile-tolerances.ts';

const percent = (share: number): string => `${(100 * share).toPrecision(3)} %`;

function valueAt(points: readonly { readonly at: number; readonly value: number }[], phase: number, period: number): number {
  const after = points.findIndex((p) => p.at >= phase);
  const b = points[Math.max(after, 0)] as { at: number; value: number };
  const a = points[(after <= 0 ? points.length : after) - 1] as { at: number; value: number };
  const span = (b.at - a.at + period) % period || period;
  return a.value + ((b.value - a.value) * ((phase - a.at + period) % period)) / span;
}

export function residualReason(table: PhaseTable, errors: Float64Array, form: 'iv-table' | 'reservoir', residual: number): string {
  const weights = pointWeights(table);
  const points = table.points.map((p, k) => ({ at: p.phase, value: errors[k] as number }));
  const wholeCycle = (points[points.length - 1]?.at ?? 0) > 180 + 1e-6;
  const period = wholeCycle ? 360 : 180;
  let all = 0;
  let unequal = 0;
  let mirrored = 0;
  let jumps = 0;
  points.forEach(({ at, value }, k) => {
    const w = weights[k] as number;
    all += w * value ** 2;
    const opposite = valueAt(points, (at + 180) % 360, period);
    if (wholeCycle) unequal += w * ((value + opposite) / 2) ** 2;
    // errors before the crest against those after it, each half-cycle for itself
    const twin = valueAt(points, at <= 180 ? 180 - at : 540 - at, period);
    mirrored += w * ((value - twin) / 2) ** 2;
    const next = points[k + 1];
    if (next !== undefined) jumps += w * (next.value - value) ** 2;
  });
  const said = `The best fit (${form}) leaves ${percent(residual)} of the r.m.s. current, more than ${percent(RESIDUAL_LIMIT)}: `;
  // independent errors differ from their neighbours by twice their own square, a smooth error by far less
  const coarse = points.length < (FEWEST_SAMPLES_A_PERIOD * period) / 360;
  if (jumps > 1.2 * all) return `${said}it jumps from point to point, so the record is ${coarse ? 'too coarse, or noisy' : 'noisy'}.`;
  if (unequal > 0.5 * all) return `${said}the two half-cycles differ, as with an offset or a lamp that uses one polarity.`;
  if (mirrored > 0.5 * all) {
    return `${said}the current before the crest differs from that after it by more than a capacitor at the input explains, as where the phase is shifted, the sine was not undimmed, or the driver has a memory.`;
  }
  return `${said}the current is not a curve of the voltage with a capacitor beside it, nor a reservoir's arc.`;
}
