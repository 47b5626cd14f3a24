/** The lamps' part of the deck: a group of like lamps as one lamp with its impedances divided by their number, and the added load. */
import type { AddedLoad, Bleeder, IvPoint, LampGroup, Load } from '../../model/pairing.ts';
import { inductorOrShort, number, piecewise, resistorOrShort, seriesRC } from './deck-element.ts';

/** two diode drops, V */
const bridge = 1.4;
/** beyond every voltage of a run, V */
const far = 5000;

type Points = (readonly [number, number])[];

export function lampGroup(group: LampGroup, index: number, lampLine: string): string[] {
  const { count, lamp } = group;
  const { input, load } = lamp;
  const p = `p${index}`;
  const magnitude = `abs(v(${p}))`;
  const bleeder = input.bleeder?.kind === 'active' ? input.bleeder : null;
  return [
    resistorOrShort(`series${index}`, lampLine, input.seriesCapacitance > 0 ? `d${index}` : `q${index}`, input.seriesResistance / count),
    ...(input.seriesCapacitance > 0
      ? [
          `cdropper${index} d${index} q${index} ${number(input.seriesCapacitance * count)}`,
          `rdropper${index} d${index} q${index} ${number(1e6 / count)}`,
        ]
      : []),
    ...inductorOrShort(
      `input${index}`,
      `q${index}`,
      p,
      input.inductance / count,
      input.inductorLoss === null ? null : input.inductorLoss / count,
    ),
    ...(input.capacitance > 0 ? [`cinput${index} ${p} 0 ${number(input.capacitance * count)}`] : []),
    ...(input.damper === null ? [] : seriesRC(`damper${index}`, p, '0', input.damper.resistance / count, input.damper.capacitance * count)),
    ...passiveBleeder(input.bleeder, index, p, count),
    `bload${index} ${p} 0 i=sgn(v(${p}))*${rectified(load, index, p, count)}`,
    ...reservoir(load, index, magnitude, count),
    ...(bleeder === null ? [] : [topUp(bleeder, load, index, p, count)]),
  ];
}

export function addedLoad(load: AddedLoad | null, lampLine: string): string[] {
  if (load === null) return [];
  if (load.kind === 'resistor') return [resistorOrShort('added', lampLine, '0', load.resistance)];
  return seriesRC('added', lampLine, '0', load.resistance, load.capacitance);
}

function passiveBleeder(bleeder: Bleeder | null, index: number, p: string, count: number): string[] {
  if (bleeder === null || bleeder.kind === 'active') return [];
  if (bleeder.kind === 'resistor') return [resistorOrShort(`bleeder${index}`, p, '0', bleeder.resistance / count)];
  return seriesRC(`bleeder${index}`, p, '0', bleeder.resistance / count, bleeder.capacitance * count);
}

/** The load's own current, rectified, of the whole group. */
function rectified(load: Load, index: number, p: string, count: number): string {
  const magnitude = `abs(v(${p}))`;
  if (load.kind === 'resistive') return `${magnitude}*${number(count / load.resistance)}`;
  if (load.kind === 'iv-table')
    return piecewise(
      magnitude,
      staticCurve(load.points).map(([u, i]) => [u + bridge, i * count] as const),
    );
  return surge(load.surgeResistance / count, magnitude, index);
}

function surge(resistance: number, magnitude: string, index: number): string {
  return piecewise(`${magnitude}-v(res${index})`, [
    [-far, 0],
    [bridge, 0],
    [bridge + far, far / resistance],
  ]);
}

/** The table as a function of the voltage at the bridge output, from -far to far: no current below the curve's foot, and above its end
 * the last slope where that rises, else the last current. */
export function staticCurve(points: readonly IvPoint[]): Points {
  const curve: Points = points.map((point) => [point.voltage, point.current] as const);
  const first = curve[0];
  if (first === undefined)
    return [
      [-far, 0],
      [far, 0],
    ];
  if (first[0] > 0) curve.unshift([0, 0]);
  else if (first[1] > 0) curve.unshift([-1, 0]);
  curve.unshift([-far, 0]);
  const [before, last] = curve.slice(-2) as [readonly [number, number], readonly [number, number]];
  const slope = (last[1] - before[1]) / (last[0] - before[0]);
  curve.push([far, last[1] + Math.max(0, slope) * (far - last[0])]);
  return curve;
}

/** The reservoir's own node: fed through the surge resistance, drained by the converter behind it. */
function reservoir(load: Load, index: number, magnitude: string, count: number): string[] {
  if (load.kind !== 'reservoir') return [];
  const node = `res${index}`;
  const v = `v(${node})`;
  const minimum = load.minimumVoltage;
  const nominal = load.drain.kind === 'power' ? load.drain.power / minimum : load.drain.current;
  const above = load.drain.kind === 'power' ? `${number(load.drain.power * count)}/max(${v},1)` : number(load.drain.current * count);
  const fading = piecewise(v, [
    [-far, 0],
    [0.9 * minimum, 0],
    [minimum, nominal * count],
    [far, nominal * count],
  ]);
  return [
    `bcharge${index} 0 ${node} i=${surge(load.surgeResistance / count, magnitude, index)}`,
    `c${node} ${node} 0 ${number(load.capacitance * count)}`,
    `rleak${node} ${node} 0 ${number(1e9 / count)}`,
    `bdrain${index} ${node} 0 i=(${v} >= ${number(minimum)}) ? (${above}) : (${fading})`,
  ];
}

/** An active bleeder draws what the load lacks of its own curve: 0 at 0 V, full from 5 V to `below`, none from 2 V above that. */
function topUp(bleeder: Bleeder & { kind: 'active' }, load: Load, index: number, p: string, count: number): string {
  const magnitude = `abs(v(${p}))`;
  const offset = load.kind === 'resistive' ? 0 : bridge;
  const wanted = piecewise(magnitude, [
    [offset - far, 0],
    [offset, 0],
    [offset + 5, bleeder.current * count],
    [offset + bleeder.below, bleeder.current * count],
    [offset + bleeder.below + 2, 0],
    [far, 0],
  ]);
  const own = rectified(load, index, p, count);
  return `btopup${index} ${p} 0 i=sgn(v(${p}))*((${wanted} > ${own}) ? (${wanted}-${own}) : 0)`;
}
