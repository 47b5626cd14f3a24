/**
 * The referee: steps a circuit through time by brute force, in small equal steps that know nothing of events. Circuit equations come from
 * model-circuit.ts, each configuration is advanced by the matrix exponential of one step, and what switches is looked at only at the
 * step's end; so every event is late by up to a step. The logic of triac and diac is written again from its description:
 *   fires while the gate current is above its threshold (or within a timed pulse); latches above the latching current; lets go once the
 *   current has been below the holding current for the turn-off time. The diac conducts from its breakover until its current falls
 *   below its own holding current. The triac's drop falls straight to zero within the smaller holding current.
 */
import type { CurveSegment } from '../../model/circuit/lamp-curve.ts';
import type { Pairing } from '../../model/pairing.ts';
import { BRIDGE_DROP, LEAST_RESISTANCE } from '../../model/tolerances.ts';
import { type Branch, type Circuit, circuitOf, NEUTRAL } from './model-circuit.ts';
import { NodeEquations, type Row } from './model-nodes.ts';

/** angles of every firing and letting go, half-cycle by half-cycle; an end may pass 180 and belongs to where its firing was */
export interface SteppedHalfCycle {
  readonly firings: number[];
  readonly ends: number[];
}

interface LampState {
  sign: 1 | -1;
  segment: number;
  conducting: boolean;
  topped: boolean;
  drain: number;
}

interface Parts {
  /** 0 open, 1 below the knee, 2 beyond it */
  triac: 0 | 1 | 2;
  triacSign: 1 | -1;
  diac: boolean;
  diacSign: 1 | -1;
  readonly lamps: LampState[];
}

/** one configuration, ready to be stepped: the vector is the states, sin, cos, 1 */
interface Stepped {
  readonly advance: Float64Array;
  readonly triacCurrent: Row;
  readonly diacVoltage: Row | null;
  readonly diacCurrent: Row | null;
  /** per lamp: its voltage, the gap at its bridge in either polarity, its charging current less what the bleeder would take */
  readonly voltage: readonly Row[];
  readonly excess: readonly (Row | null)[];
}

function multiply(a: Float64Array, b: Float64Array, n: number): Float64Array {
  const product = new Float64Array(n * n);
  for (let r = 0; r < n; r++) {
    for (let k = 0; k < n; k++) {
      const factor = a[r * n + k] as number;
      if (factor === 0) continue;
      for (let c = 0; c < n; c++) product[r * n + c] = (product[r * n + c] as number) + factor * (b[k * n + c] as number);
    }
  }
  return product;
}

/** e^m by scaling, Taylor's series and squaring */
function exponential(m: Float64Array, n: number): Float64Array {
  let norm = 0;
  for (let r = 0; r < n; r++) {
    let sum = 0;
    for (let c = 0; c < n; c++) sum += Math.abs(m[r * n + c] as number);
    norm = Math.max(norm, sum);
  }
  const squarings = Math.max(0, Math.ceil(Math.log2(norm / 0.25)));
  const scaled = m.map((x) => x / 2 ** squarings);
  let result = new Float64Array(n * n);
  for (let k = 0; k < n; k++) result[k * n + k] = 1;
  let term = Float64Array.from(result);
  for (let k = 1; k <= 12; k++) {
    term = multiply(term, scaled, n).map((x) => x / k) as Float64Array<ArrayBuffer>;
    result = result.map((x, at) => x + (term[at] as number));
  }
  let power = result;
  for (let k = 0; k < squarings; k++) power = multiply(power, power, n) as Float64Array<ArrayBuffer>;
  return power;
}

class Stepper {
  private readonly circuit: Circuit;
  private readonly pairing: Pairing;
  private readonly omega: number;
  private readonly peak: number;
  private readonly step: number;
  private readonly timingResistance: number;
  private readonly known = new Map<string, Stepped>();
  readonly size: number;

  constructor(pairing: Pairing, dial: number, step: number) {
    this.pairing = pairing;
    this.circuit = circuitOf(pairing);
    this.omega = 2 * Math.PI * pairing.mains.frequency;
    this.peak = Math.SQRT2 * pairing.mains.voltage;
    this.step = step;
    const { drive } = pairing.dimmer;
    this.timingResistance = drive.kind === 'diac' ? drive.fixedResistance + drive.potentiometer * (1 - dial / 100) : 0;
    this.size = this.circuit.storages.length + 3;
  }

  get lamps(): Circuit['lamps'] {
    return this.circuit.lamps;
  }

  get knee(): number {
    const { positive, negative } = this.pairing.dimmer.holdingCurrent;
    return Math.min(positive, negative);
  }

  configured(parts: Parts): Stepped {
    let key = `${parts.triac}${parts.triacSign}${parts.diac}${parts.diacSign}`;
    for (const l of parts.lamps) key += `,${l.sign}${l.segment}${l.conducting}${l.topped}${l.drain}`;
    let stepped = this.known.get(key);
    if (stepped === undefined) {
      stepped = this.build(parts);
      this.known.set(key, stepped);
    }
    return stepped;
  }

  private build(parts: Parts): Stepped {
    const { circuit, size } = this;
    const { dimmer } = this.pairing;
    const n = size - 3;
    // columns of the node equations: states, mains, one
    const ONE = n + 1;
    const equations = new NodeEquations(circuit, 1);
    const closedOnto = (branch: Branch, resistance: number, drop: number): void => {
      equations.conductance(branch, 1 / resistance);
      equations.current(branch, ONE, -drop / resistance);
    };
    const triacResistance = Math.max(dimmer.onResistance, LEAST_RESISTANCE) + (parts.triac === 1 ? dimmer.onVoltage / this.knee : 0);
    const triacDrop = parts.triac === 2 ? parts.triacSign * dimmer.onVoltage : 0;
    if (parts.triac !== 0) closedOnto(circuit.triac, triacResistance, triacDrop);
    const drive = dimmer.drive.kind === 'diac' ? dimmer.drive : null;
    const diacResistance = drive === null ? 1 : drive.diacResistance + drive.gateResistance;
    const diacDrop = drive === null ? 0 : parts.diacSign * (drive.residualVoltage + drive.gateVoltage);
    if (circuit.timing !== null) {
      equations.conductance(circuit.timing.resistor, 1 / this.timingResistance);
      if (parts.diac) closedOnto(circuit.timing.diac, diacResistance, diacDrop);
    }
    circuit.lamps.forEach((lamp, k) => {
      const l = parts.lamps[k] as LampState;
      const at = { a: lamp.node, b: NEUTRAL };
      const segment = lamp.curve?.[l.segment];
      const charging = lamp.reservoir !== null && l.conducting;
      if (segment !== undefined && (!charging || l.topped)) {
        equations.conductance(at, segment.slope * lamp.count);
        equations.current(at, ONE, segment.offset * lamp.count * l.sign);
      } else if (charging && lamp.reservoir !== null) {
        const g = 1 / lamp.reservoir.surgeResistance;
        equations.conductance(at, g);
        equations.current(at, lamp.reservoir.state, -g * l.sign);
        equations.current(at, ONE, -g * BRIDGE_DROP * l.sign);
      }
    });
    const solved = equations.solve();
    // onto the vector: states, sin, cos, 1
    const row = (columns: Row): Row => {
      const out = new Float64Array(size);
      for (let k = 0; k < n; k++) out[k] = columns[k] ?? 0;
      out[n] = (columns[n] ?? 0) * this.peak;
      out[n + 2] = columns[ONE] ?? 0;
      return out;
    };
    const one = new Float64Array(size);
    one[n + 2] = 1;
    const mix = (...terms: readonly (readonly [number, Row])[]): Row =>
      new Float64Array(size).map((_, c) => terms.reduce((sum, [factor, r]) => sum + factor * (r[c] ?? 0), 0));
    const derivative = new Float64Array(size * size);
    const derive = (state: number, r: Row, factor: number): void => {
      for (let c = 0; c < size; c++) derivative[state * size + c] = (derivative[state * size + c] ?? 0) + factor * (r[c] ?? 0);
    };
    circuit.capacitors.forEach((c, k) => {
      derive(c.state, row(solved.capacitorCurrent(k)), 1 / c.storage);
    });
    for (const l of circuit.inductors) derive(l.state, row(solved.voltage(l)), 1 / l.storage);
    const voltage = circuit.lamps.map((lamp) => row(solved.voltage({ a: lamp.node, b: NEUTRAL })));
    const excess = circuit.lamps.map((lamp, k) => {
      const l = parts.lamps[k] as LampState;
      const { reservoir } = lamp;
      if (reservoir === null) return null;
      const held = new Float64Array(size);
      held[reservoir.state] = 1;
      const v = voltage[k] as Row;
      const g = 1 / reservoir.surgeResistance;
      const charge = mix([l.sign * g, v], [-g, held], [-g * BRIDGE_DROP, one]);
      if (l.conducting) derive(reservoir.state, charge, 1 / reservoir.capacitance);
      const drain = reservoir.drain[l.drain] as CurveSegment;
      derive(reservoir.state, held, -(drain.slope * lamp.count + 1 / reservoir.leakage) / reservoir.capacitance);
      derive(reservoir.state, one, (-drain.offset * lamp.count) / reservoir.capacitance);
      const segment = lamp.curve?.[l.segment];
      if (segment === undefined) return null;
      return mix([1, charge], [-segment.slope * lamp.count * l.sign, v], [-segment.offset * lamp.count, one]);
    });
    derivative[n * size + n + 1] = this.omega;
    derivative[(n + 1) * size + n] = -this.omega;
    const triacVoltage = row(solved.voltage(circuit.triac));
    const diacVoltage = circuit.timing === null ? null : row(solved.voltage(circuit.timing.diac));
    return {
      advance: exponential(
        derivative.map((x) => x * this.step),
        size,
      ),
      triacCurrent:
        parts.triac === 0 ? new Float64Array(size) : mix([1 / triacResistance, triacVoltage], [-triacDrop / triacResistance, one]),
      diacVoltage,
      diacCurrent: diacVoltage === null || !parts.diac ? null : mix([1 / diacResistance, diacVoltage], [-diacDrop / diacResistance, one]),
      voltage,
      excess,
    };
  }
}

function dot(row: Row, x: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < x.length; k++) sum += (row[k] as number) * (x[k] as number);
  return sum;
}

/** times at which a timed drive's gate is on within a half-cycle: [from, to] */
function gatePulses(pairing: Pairing, dial: number): (readonly [number, number])[] {
  const { drive } = pairing.dimmer;
  if (drive.kind !== 'timed') return [];
  const half = 1 / (2 * pairing.mains.frequency);
  const first = ((drive.firingAngleLow + ((drive.firingAngleFull - drive.firingAngleLow) * dial) / 100) / 180) * half;
  if (drive.pulses === 'held') return [[first, half]];
  if (drive.pulses === 'single') return [[first, Math.min(half, first + drive.gatePulse)]];
  const pulses: (readonly [number, number])[] = [];
  for (let at = first; at < half; at += drive.pulseSpacing) pulses.push([at, Math.min(half, at + drive.gatePulse)]);
  return pulses;
}

/** from rest; null where parts at one instant find no configuration they agree on */
export function stepThrough(pairing: Pairing, dial: number, halfCycles: number, stepsPerHalfCycle: number): SteppedHalfCycle[] | null {
  const { dimmer } = pairing;
  const half = 1 / (2 * pairing.mains.frequency);
  const step = half / stepsPerHalfCycle;
  const stepper = new Stepper(pairing, dial, step);
  const { knee, size } = stepper;
  const drive = dimmer.drive.kind === 'diac' ? dimmer.drive : null;
  const straight = dimmer.wiring === 'two-wire';
  const up = drive === null ? 0 : straight ? drive.breakover.positive : drive.breakover.negative;
  const down = drive === null ? 0 : straight ? drive.breakover.negative : drive.breakover.positive;
  const pulses = gatePulses(pairing, dial);
  const parts: Parts = {
    triac: 0,
    triacSign: 1,
    diac: false,
    diacSign: 1,
    lamps: stepper.lamps.map(() => ({ sign: 1, segment: 0, conducting: false, topped: false, drain: 0 })),
  };
  let [x, next] = [new Float64Array(size), new Float64Array(size)];
  x[size - 2] = 1;
  x[size - 1] = 1;
  const records: SteppedHalfCycle[] = Array.from({ length: halfCycles }, () => ({ firings: [], ends: [] }));
  let [gated, latched, belowSince, firedIn] = [false, false, Number.POSITIVE_INFINITY, 0];
  let mode = stepper.configured(parts);

  const open = (angle: number, inHalfCycle: number): void => {
    parts.triac = 0;
    latched = false;
    belowSince = Number.POSITIVE_INFINITY;
    records[firedIn]?.ends.push(angle + 180 * (inHalfCycle - firedIn));
  };
  /** lets every part look once; true when one changed */
  const look = (k: number, halfCycle: number): boolean => {
    const angle = (k / stepsPerHalfCycle) * 180;
    const time = k * step;
    let changed = false;
    const set = <K extends keyof LampState>(lamp: LampState, key: K, value: LampState[K]): void => {
      if (lamp[key] === value) return;
      lamp[key] = value;
      changed = true;
    };
    stepper.lamps.forEach((lamp, index) => {
      const l = parts.lamps[index] as LampState;
      const v = dot(mode.voltage[index] as Row, x);
      const { curve, reservoir } = lamp;
      if (curve !== null && curve.length > 1 && !(l.conducting && !l.topped)) {
        const s = l.segment === 0 ? (v < 0 ? -1 : 1) : l.sign;
        const [from, to] = [(curve[l.segment] as CurveSegment).from, curve[l.segment + 1]?.from ?? Number.POSITIVE_INFINITY];
        if (s * v > to + 1e-9) {
          set(l, 'sign', s);
          set(l, 'segment', l.segment + 1);
        } else if (l.segment > 0 && s * v < from - 1e-9) set(l, 'segment', l.segment - 1);
      } else if (curve !== null && l.conducting) {
        // not bound to the curve, but it must know where on it the lamp is
        const at = curve.findLastIndex((c) => c.from <= l.sign * v);
        set(l, 'segment', Math.max(0, at));
      }
      if (reservoir === null) return;
      const held = x[reservoir.state] as number;
      const to = reservoir.drain[l.drain + 1]?.from ?? Number.POSITIVE_INFINITY;
      if (held > to) set(l, 'drain', l.drain + 1);
      else if (l.drain > 0 && held < (reservoir.drain[l.drain] as CurveSegment).from) set(l, 'drain', l.drain - 1);
      if (!l.conducting) {
        if (Math.abs(v) > held + BRIDGE_DROP + 1e-9) {
          set(l, 'sign', v < 0 ? -1 : 1);
          set(l, 'conducting', true);
          const segment = curve?.[l.segment];
          set(l, 'topped', segment !== undefined && (segment.slope !== 0 || segment.offset !== 0));
        }
        return;
      }
      if (l.sign * v < held + BRIDGE_DROP - 1e-9) {
        set(l, 'conducting', false);
        set(l, 'topped', false);
      } else if (mode.excess[index] !== null) {
        const excess = dot(mode.excess[index] as Row, x);
        if (l.topped && excess > 1e-9) set(l, 'topped', false);
        else if (!l.topped && excess < -1e-9) set(l, 'topped', true);
      }
    });
    if (drive !== null && mode.diacVoltage !== null) {
      if (parts.diac) {
        const current = parts.diacSign * dot(mode.diacCurrent as Row, x);
        gated = current > drive.gateThreshold;
        if (current < drive.diacHoldingCurrent) {
          parts.diac = false;
          gated = false;
          changed = true;
        }
      } else {
        const v = dot(mode.diacVoltage, x);
        if (v > up || v < -down) {
          parts.diac = true;
          parts.diacSign = v > 0 ? 1 : -1;
          changed = true;
        }
      }
    } else if (drive === null) gated = pulses.some(([from, to]) => time >= from - step / 2 && time < to - step / 2);
    if (changed) mode = stepper.configured(parts);
    if (parts.triac === 0) {
      if (!gated) return changed;
      parts.triac = 1;
      latched = false;
      belowSince = Number.POSITIVE_INFINITY;
      firedIn = halfCycle;
      records[halfCycle]?.firings.push(angle);
      mode = stepper.configured(parts);
      return true;
    }
    const current = dot(mode.triacCurrent, x);
    const size = Math.abs(current);
    const polarity = current < 0 ? 'negative' : 'positive';
    if (parts.triac === 1 && size > knee) {
      parts.triac = 2;
      parts.triacSign = current < 0 ? -1 : 1;
      changed = true;
    } else if (parts.triac === 2 && parts.triacSign * current < knee) {
      parts.triac = 1;
      changed = true;
    }
    if (!changed) {
      if (size > dimmer.latchingCurrent[polarity]) latched = true;
      if (latched && size < dimmer.holdingCurrent[polarity]) {
        if (belowSince === Number.POSITIVE_INFINITY) belowSince = halfCycle * half + time;
        if (halfCycle * half + time - belowSince >= dimmer.turnOffTime) latched = false;
      } else belowSince = Number.POSITIVE_INFINITY;
      if (!latched && !gated) {
        open(angle, halfCycle);
        changed = true;
      }
    }
    if (changed) mode = stepper.configured(parts);
    return changed;
  };

  for (let halfCycle = 0; halfCycle < halfCycles; halfCycle++) {
    for (let k = 0; k < stepsPerHalfCycle; k++) {
      let looks = 0;
      while (look(k, halfCycle)) if (++looks > 200) return null;
      const { advance } = mode;
      for (let r = 0; r < size; r++) {
        let sum = 0;
        for (let c = 0; c < size; c++) sum += (advance[r * size + c] as number) * (x[c] as number);
        next[r] = sum;
      }
      [x, next] = [next, x];
    }
  }
  return records;
}
