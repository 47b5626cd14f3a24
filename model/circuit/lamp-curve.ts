/**
 * Piecewise-linear curves: what a lamp draws statically at its input, what an active bleeder adds, and how a reservoir capacitor is
 * drained. A curve is odd about zero, starts at (0, 0) and is given for positive voltages; beyond its last breakpoint the last
 * segment goes on.
 */
import type { IvPoint } from '../pairing.ts';
import { BLEEDER_RELEASE, BLEEDER_START, BRIDGE_DROP, CURVE_START, DRAIN_FADE, DRAIN_RATIO, DRAIN_SPAN } from '../tolerances.ts';

/** current = slope * v + offset for from <= v < (next segment's from); v in V, current in A */
export interface CurveSegment {
  readonly from: number;
  readonly slope: number;
  readonly offset: number;
}

export type Curve = readonly CurveSegment[];

interface Corner {
  readonly v: number;
  readonly i: number;
}

function throughCorners(corners: readonly Corner[], lastSlope: number): Curve {
  const segments: CurveSegment[] = [];
  for (let k = 0; k < corners.length; k++) {
    const here = corners[k] as Corner;
    const next = corners[k + 1];
    if (next !== undefined && next.v <= here.v) continue;
    const slope = next === undefined ? lastSlope : (next.i - here.i) / (next.v - here.v);
    segments.push({ from: here.v, slope, offset: here.i - slope * here.v });
  }
  // straight on: neighbours on one line are one segment
  return segments.filter((s, k) => {
    const before = segments[k - 1];
    return before === undefined || Math.abs(before.slope - s.slope) > 1e-12 * Math.abs(s.slope) || before.offset !== s.offset;
  });
}

/** current at voltage v >= 0 */
export function curveAt(curve: Curve, v: number): number {
  let at = curve[0] as CurveSegment;
  for (const s of curve) if (s.from <= v) at = s;
  return at.slope * v + at.offset;
}

export function curveFalls(curve: Curve): boolean {
  return curve.some((s) => s.slope < 0);
}

/** the curve of a table measured at the bridge output, as seen at the lamp's input: shifted by the bridge's drop */
export function tableCurve(points: readonly IvPoint[]): Curve {
  const first = points[0] as IvPoint;
  const corners: Corner[] = [{ v: 0, i: 0 }];
  if (first.voltage > 0) corners.push({ v: BRIDGE_DROP, i: 0 });
  else if (first.current > 0) corners.push({ v: BRIDGE_DROP - CURVE_START, i: 0 });
  for (const p of points) corners.push({ v: p.voltage + BRIDGE_DROP, i: p.current });
  const last = points[points.length - 1] as IvPoint;
  const beforeLast = points[points.length - 2] as IvPoint;
  // a rising end goes on rising, a falling one is held: a current cannot be extrapolated below what was measured
  const lastSlope = Math.max(0, (last.current - beforeLast.current) / (last.voltage - beforeLast.voltage));
  return throughCorners(corners, lastSlope);
}

export function resistorCurve(resistance: number): Curve {
  return [{ from: 0, slope: 1 / resistance, offset: 0 }];
}

/** what an active bleeder tops the lamp's draw up to; `drop` is that of the bridge before it, 0 where the lamp has none */
export function bleederCurve(current: number, below: number, drop = BRIDGE_DROP): Curve {
  const start = Math.min(BLEEDER_START, below);
  return throughCorners(
    [
      { v: 0, i: 0 },
      { v: drop, i: 0 },
      { v: drop + start, i: current },
      { v: drop + below, i: current },
      { v: drop + below + BLEEDER_RELEASE, i: 0 },
    ],
    0,
  );
}

/** the larger of two curves at every voltage, with a corner where they cross */
export function largerCurve(a: Curve, b: Curve): Curve {
  const at = new Set<number>([...a, ...b].map((s) => s.from));
  const edges = [...at].sort((p, q) => p - q);
  for (let k = 0; k < edges.length; k++) {
    const lo = edges[k] as number;
    const hi = edges[k + 1] ?? Number.POSITIVE_INFINITY;
    const sa = a.findLast((s) => s.from <= lo) as CurveSegment;
    const sb = b.findLast((s) => s.from <= lo) as CurveSegment;
    if (sa.slope === sb.slope) continue;
    const cross = (sb.offset - sa.offset) / (sa.slope - sb.slope);
    if (cross > lo && cross < hi) at.add(cross);
  }
  const sorted = [...at].sort((p, q) => p - q);
  const corners = sorted.map((v) => ({ v, i: Math.max(curveAt(a, v), curveAt(b, v)) }));
  const end = corners[corners.length - 1] as Corner;
  const lastSlope = Math.max(curveAt(a, end.v + 1), curveAt(b, end.v + 1)) - end.i;
  return throughCorners(corners, lastSlope);
}

/** what drains a reservoir at capacitor voltage v: constant current or constant power above the minimum voltage, fading out below it */
export function drainCurve(
  drain: { readonly kind: 'power'; readonly power: number } | { readonly kind: 'current'; readonly current: number },
  minimumVoltage: number,
  mainsPeak: number,
): Curve {
  const fadeFrom = minimumVoltage * (1 - DRAIN_FADE);
  const corners: Corner[] = [{ v: 0, i: 0 }];
  if (fadeFrom > 0) corners.push({ v: fadeFrom, i: 0 });
  if (drain.kind === 'current') {
    corners.push({ v: minimumVoltage, i: drain.current });
    return throughCorners(corners, 0);
  }
  const top = Math.max(mainsPeak * DRAIN_SPAN, minimumVoltage * 2);
  const count = Math.ceil(Math.log(top / minimumVoltage) / Math.log(DRAIN_RATIO));
  const ratio = (top / minimumVoltage) ** (1 / count);
  // chords lie above P/v by at most this share in their middle; lowering every corner by half of it centres the error
  const excess = (Math.sqrt(ratio) - 1 / Math.sqrt(ratio)) ** 2 / 4;
  for (let k = 0; k <= count; k++) {
    const v = minimumVoltage * ratio ** k;
    corners.push({ v, i: (drain.power / v) * (1 - excess / 2) });
  }
  return throughCorners(corners, 0);
}
