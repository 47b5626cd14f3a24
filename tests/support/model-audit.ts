/**
 * Audits a run segment by segment against a second description of its circuit (model-circuit.ts): for every element its voltage and
 * current are set up as functions of the state and integrated in closed form over each segment. From these follow
 *  - the energy balance: drawn from the mains = turned to heat + more energy stored;
 *  - for every capacitor the charge that flowed against the change of its voltage, for every inductor the flux against its current;
 *  - whether every switching part keeps within its region all through the segment;
 *  - whether the run's outputs are the currents and voltages they are said to be.
 * What this does not prove: that the triac latches and lets go when it should (see model-stepper.ts for that).
 */
import { OUTPUT } from '../../model/circuit/configuration.ts';
import type { DimmerRun } from '../../model/engine/dimmer-run.ts';
import type { Mode } from '../../model/engine/mode.ts';
import { Segment } from '../../model/engine/segment.ts';
import type { Pairing } from '../../model/pairing.ts';
import { BRIDGE_DROP, LADDER_LEVELS, LEAST_RESISTANCE } from '../../model/tolerances.ts';
import { type Branch, type Circuit, circuitOf, NEUTRAL } from './model-circuit.ts';
import { type CoordinateRow, Visit } from './model-exponentials.ts';
import { NodeEquations, type Row } from './model-nodes.ts';

export interface AuditTotals {
  /** J drawn from the mains, turned to heat, and their gross amount (what flowed either way) */
  drawn: number;
  heat: number;
  gross: number;
  /** J stored at the start of the first segment and at the end of the last */
  storedBefore: number | null;
  storedAfter: number;
  /** largest mismatch of a state's change with its current or voltage integral, relative (see `worst`) */
  worstState: number;
  /** largest jump of a state between two segments, likewise */
  worstJump: number;
  /** largest excess over a characteristic, V or A, and what it was */
  worstExcess: number;
  excessOf: string;
  /** largest difference between a reported output and the audit's own figure, relative to the output's largest value */
  worstReported: number;
  segments: number;
}

interface Watched {
  readonly name: string;
  /** excess over what the part may do, from the values of the audit's outputs */
  readonly excess: (value: (row: number) => number) => number;
}

interface AuditedMode {
  /** the mains' voltage and current, and every lossy element's */
  readonly source: readonly [CoordinateRow, CoordinateRow];
  readonly lossy: readonly (readonly [CoordinateRow, CoordinateRow])[];
  /** every state, V or A, and its derivative */
  readonly states: readonly (readonly [CoordinateRow, CoordinateRow])[];
  readonly watched: readonly Watched[];
  /** quantities that the run reports: the audit's row and the run's output */
  readonly reported: readonly (readonly [CoordinateRow, number])[];
  /** what the watched parts look at */
  readonly rows: readonly CoordinateRow[];
}

const SAMPLES = 7;
/** V or A */
export const EXCESS_ALLOWED = 1e-4;

export class Audit {
  readonly totals: AuditTotals = {
    drawn: 0,
    heat: 0,
    gross: 0,
    storedBefore: null,
    storedAfter: 0,
    worstState: 0,
    worstJump: 0,
    worstExcess: 0,
    excessOf: '',
    worstReported: 0,
    segments: 0,
  };
  private readonly circuit: Circuit;
  private readonly pairing: Pairing;
  private readonly run: DimmerRun;
  private readonly known = new WeakMap<Mode, AuditedMode>();
  private readonly largest: Float64Array;
  private last: Float64Array | null = null;
  private largestCoordinate = 0;
  private readonly mismatches: Float64Array;
  private readonly jumps: Float64Array;
  private readonly reportedSizes: number[] = [];
  private timingResistance: number;

  constructor(pairing: Pairing, run: DimmerRun, dial: number) {
    this.circuit = circuitOf(pairing);
    this.pairing = pairing;
    this.run = run;
    const { network } = run;
    if (network.states !== this.circuit.storages.length) throw new Error('the audit describes another number of states');
    this.circuit.storages.forEach((storage, k) => {
      if (Math.abs((network.scale[k] ?? 0) ** 2 / storage - 1) > 1e-12) throw new Error(`state ${k} stores something else in the audit`);
    });
    this.largest = new Float64Array(network.states).fill(1e-6);
    this.mismatches = new Float64Array(network.states);
    this.jumps = new Float64Array(network.states);
    const { drive } = pairing.dimmer;
    this.timingResistance = drive.kind === 'diac' ? drive.fixedResistance + drive.potentiometer * (1 - dial / 100) : 0;
  }

  private build(mode: Mode): AuditedMode {
    const { circuit, pairing } = this;
    const { dimmer } = pairing;
    const { linear, configuration, rest } = mode;
    const { flips } = mode.mapped;
    const n = linear.states;
    // columns: states, mains, one
    const [MAINS, ONE] = [n, n + 1];
    const equations = new NodeEquations(circuit, 1);
    const constant = (value: number): Row => {
      const row = new Float64Array(equations.columns);
      row[ONE] = value;
      return row;
    };
    const column = (at: number, factor = 1): Row => {
      const row = new Float64Array(equations.columns);
      row[at] = factor;
      return row;
    };
    const sum = (...terms: readonly (readonly [number, Row])[]): Row =>
      constant(0).map((_, c) => terms.reduce((total, [factor, row]) => total + factor * (row[c] ?? 0), 0));
    // on its characteristic the triac is a resistance and a constant drop; below its knee the drop falls straight to zero
    const closed = configuration.triac !== 'open';
    const low = configuration.triac === 'low';
    const knee = Math.min(dimmer.holdingCurrent.positive, dimmer.holdingCurrent.negative);
    const triacResistance = Math.max(dimmer.onResistance, LEAST_RESISTANCE) + (low ? dimmer.onVoltage / knee : 0);
    const triacDrop = low ? 0 : configuration.triacSign * dimmer.onVoltage;
    if (closed) {
      equations.conductance(circuit.triac, 1 / triacResistance);
      equations.current(circuit.triac, ONE, -triacDrop / triacResistance);
    }
    const diac = dimmer.drive.kind === 'diac' && configuration.diac && circuit.timing !== null ? dimmer.drive : null;
    const diacResistance = diac === null ? 1 : diac.diacResistance + diac.gateResistance;
    const diacDrop = diac === null ? 0 : configuration.diacSign * (diac.residualVoltage + diac.gateVoltage);
    if (circuit.timing !== null) {
      equations.conductance(circuit.timing.resistor, 1 / this.timingResistance);
      if (diac !== null) {
        equations.conductance(circuit.timing.diac, 1 / diacResistance);
        equations.current(circuit.timing.diac, ONE, -diacDrop / diacResistance);
      }
    }
    const lampParts = circuit.lamps.map((lamp, k) => {
      const g = configuration.groups[k] ?? { sign: 1, segment: 0, conducting: false, topped: false, drain: 0 };
      const segment = lamp.curve?.[g.segment];
      const at: Branch = { a: lamp.node, b: NEUTRAL };
      const byCurve = segment !== undefined && (lamp.reservoir === null || !g.conducting || g.topped);
      const charging = lamp.reservoir !== null && g.conducting;
      if (byCurve) {
        equations.conductance(at, segment.slope * lamp.count);
        equations.current(at, ONE, segment.offset * lamp.count * g.sign);
      } else if (charging && lamp.reservoir !== null) {
        const surge = 1 / lamp.reservoir.surgeResistance;
        equations.conductance(at, surge);
        equations.current(at, lamp.reservoir.state, -surge * g.sign);
        equations.current(at, ONE, -surge * BRIDGE_DROP * g.sign);
      }
      return { lamp, g, segment, at, byCurve, charging };
    });
    const solved = equations.solve();

    const rows: Row[] = [];
    const add = (row: Row): number => rows.push(row) - 1;
    /** a row over the columns as one over the mode's coordinates */
    const inCoordinates = (index: number): CoordinateRow => {
      const row = rows[index] ?? constant(0);
      const out = new Float64Array(linear.coordinates + 1);
      const increase = (k: number, by: number): void => {
        out[k] = (out[k] ?? 0) + by;
      };
      for (let state = 0; state < n; state++) {
        // volts or amperes per unit of the scaled, mirrored state
        const factor = ((row[state] ?? 0) * (flips[state] ?? 1)) / (this.run.network.scale[state] ?? 1);
        if (factor === 0) continue;
        for (let k = 0; k < n; k++) increase(k, factor * (linear.modal.basis[state * n + k] ?? 0));
        increase(n, factor * (linear.drive[state] ?? 0));
        increase(n + 1, factor * (linear.drive[n + state] ?? 0));
        increase(n + 2, factor * (rest[state] ?? 0));
      }
      increase(n + 1, (row[MAINS] ?? 0) * this.run.network.peak);
      increase(n + 2, row[ONE] ?? 0);
      return out;
    };
    const lossy: [number, number][] = [];
    const watched: Watched[] = [];
    for (const r of circuit.resistors) {
      const v = solved.voltage(r);
      lossy.push([add(v), add(v.map((x) => x / r.resistance))]);
    }
    const mains = column(MAINS);
    const wiring = sum([1, mains], [-1, solved.voltage({ a: circuit.source.node, b: NEUTRAL })]);
    const lineCurrent = wiring.map((x) => x / circuit.source.resistance);
    lossy.push([add(wiring), add(lineCurrent)]);
    const source: [number, number] = [add(mains), add(lineCurrent)];

    /** current through a part that is `closed` onto a resistance and a drop */
    const through = (voltage: Row, isClosed: boolean, drop: number, resistance: number): Row =>
      isClosed ? sum([1 / resistance, voltage], [-1 / resistance, constant(drop)]) : constant(0);
    const triacVoltage = solved.voltage(circuit.triac);
    const triacCurrent = add(through(triacVoltage, closed, triacDrop, triacResistance));
    lossy.push([add(triacVoltage), triacCurrent]);
    watched.push({
      name: 'triac',
      excess: (value) => {
        const current = value(triacCurrent);
        if (!closed) return 0;
        return low ? Math.abs(current) - knee : knee - configuration.triacSign * current;
      },
    });
    const reported: [number, number][] = [[triacCurrent, OUTPUT.triacCurrent]];
    if (circuit.timing !== null && dimmer.drive.kind === 'diac') {
      const { drive } = dimmer;
      const timingDrop = solved.voltage(circuit.timing.resistor);
      lossy.push([add(timingDrop), add(timingDrop.map((x) => x / this.timingResistance))]);
      const voltage = solved.voltage(circuit.timing.diac);
      const diacVoltage = add(voltage);
      const diacCurrent = add(through(voltage, diac !== null, diacDrop, diacResistance));
      lossy.push([diacVoltage, diacCurrent]);
      reported.push([diacCurrent, OUTPUT.diacCurrent], [diacVoltage, OUTPUT.timingVoltage]);
      // with a neutral the mains charges the capacitor against the dimmer's terminal: the polarities exchange
      const { positive, negative } = drive.breakover;
      const [up, down] = dimmer.wiring === 'two-wire' ? [positive, negative] : [negative, positive];
      watched.push({
        name: 'diac',
        excess: (value) => {
          if (diac === null) return Math.max(value(diacVoltage) - up, -value(diacVoltage) - down);
          return drive.diacHoldingCurrent - configuration.diacSign * value(diacCurrent);
        },
      });
    }
    reported.push([add(lineCurrent), OUTPUT.lineCurrent]);
    reported.push([add(solved.voltage({ a: circuit.triac.b, b: NEUTRAL })), OUTPUT.lampVoltage]);
    reported.push([add(sum(...circuit.inputs.map((r): [number, Row] => [1 / r.resistance, solved.voltage(r)]))), OUTPUT.lampCurrent]);

    const derivatives: Row[] = circuit.storages.map(() => constant(0));
    circuit.capacitors.forEach((c, k) => {
      derivatives[c.state] = solved.capacitorCurrent(k).map((x) => x / c.storage);
    });
    for (const l of circuit.inductors) derivatives[l.state] = solved.voltage(l).map((x) => x / l.storage);
    lampParts.forEach(({ lamp, g, segment, at, byCurve, charging }, k) => {
      const voltage = solved.voltage(at);
      const v = add(voltage);
      const s = g.sign;
      const zero = constant(0);
      const byBleeder =
        byCurve && segment !== undefined
          ? sum([segment.slope * lamp.count, voltage], [1, constant(segment.offset * lamp.count * s)])
          : zero;
      if (lamp.curve !== null && byCurve) {
        const from = g.segment === 0 ? Number.NEGATIVE_INFINITY : (segment?.from ?? 0);
        const to = lamp.curve[g.segment + 1]?.from ?? Number.POSITIVE_INFINITY;
        watched.push({
          name: `curve of lamp ${k}`,
          excess: (value) => {
            const size = g.segment === 0 ? Math.abs(value(v)) : s * value(v);
            return Math.max(from - size, size - to);
          },
        });
      }
      const { reservoir } = lamp;
      if (reservoir === null) {
        if (byCurve) lossy.push([v, add(byBleeder)]);
        return;
      }
      const held = column(reservoir.state);
      const gap = sum([s, voltage], [-1, held], [1, constant(-BRIDGE_DROP)]);
      const charge = charging ? gap.map((x) => x / reservoir.surgeResistance) : zero;
      const drain = reservoir.drain[g.drain] ?? { slope: 0, offset: 0, from: 0 };
      const drained = sum([drain.slope * lamp.count + 1 / reservoir.leakage, held], [1, constant(drain.offset * lamp.count)]);
      derivatives[reservoir.state] = sum([1 / reservoir.capacitance, charge], [-1 / reservoir.capacitance, drained]);
      // the bridge with its surge resistor, the bleeder for what it tops up, the drain
      lossy.push([add(sum([s, voltage], [-1, held])), add(charge)]);
      if (byCurve) lossy.push([v, add(sum([1, byBleeder], [-s, charge]))]);
      lossy.push([add(held), add(drained)]);
      const heldAt = add(held);
      const from = g.drain === 0 ? Number.NEGATIVE_INFINITY : drain.from;
      const to = reservoir.drain[g.drain + 1]?.from ?? Number.POSITIVE_INFINITY;
      watched.push({ name: `drain of lamp ${k}`, excess: (value) => Math.max(from - value(heldAt), value(heldAt) - to) });
      watched.push({
        name: `bridge of lamp ${k}`,
        excess: (value) => (charging ? BRIDGE_DROP + value(heldAt) - s * value(v) : Math.abs(value(v)) - value(heldAt) - BRIDGE_DROP),
      });
    });
    const states = circuit.storages.map((_, k): [number, number] => [add(column(k)), add(derivatives[k] ?? constant(0))]);

    return {
      source: [inCoordinates(source[0]), inCoordinates(source[1])],
      lossy: lossy.map(([v, i]) => [inCoordinates(v), inCoordinates(i)]),
      states: states.map(([x, derivative]) => [inCoordinates(x), inCoordinates(derivative)]),
      watched,
      reported: reported.map(([index, output]) => [inCoordinates(index), output]),
      rows: rows.map((_, k) => inCoordinates(k)),
    };
  }

  segment(mode: Mode, coordinates: Float64Array, start: number, duration: number, halfCycle: number): void {
    let audited = this.known.get(mode);
    if (audited === undefined) {
      audited = this.build(mode);
      this.known.set(mode, audited);
    }
    const t = this.totals;
    const visit = new Visit(mode, coordinates, duration);
    t.segments++;
    for (const z of coordinates) this.largestCoordinate = Math.max(this.largestCoordinate, Math.abs(z));
    const drawn = visit.productIntegral(...audited.source);
    t.drawn += drawn;
    t.gross += Math.abs(drawn);
    for (const [v, i] of audited.lossy) t.heat += visit.productIntegral(v, i);
    let [before, after] = [0, 0];
    const ends = new Float64Array(audited.states.length);
    audited.states.forEach(([value, derivative], k) => {
      const storage = this.circuit.storages[k] ?? 0;
      const [from, to] = [visit.value(value, 0), visit.value(value, duration)];
      before += (storage * from * from) / 2;
      after += (storage * to * to) / 2;
      ends[k] = to;
      this.largest[k] = Math.max(this.largest[k] ?? 0, Math.abs(from), Math.abs(to));
      this.mismatches[k] = Math.max(this.mismatches[k] ?? 0, Math.abs(to - from - visit.integral(derivative)));
      if (this.last !== null) this.jumps[k] = Math.max(this.jumps[k] ?? 0, Math.abs(from - (this.last[k] ?? 0)));
    });
    t.storedBefore ??= before;
    t.storedAfter = after;
    this.last = ends;
    for (const w of audited.watched) {
      const excessAt = (time: number): number => w.excess((row) => visit.value(audited.rows[row] as CoordinateRow, time));
      for (let k = 1; k < SAMPLES; k++) {
        const time = (k / SAMPLES) * duration;
        const excess = excessAt(time);
        if (excess <= t.worstExcess || (excess > EXCESS_ALLOWED && this.isBrief(excessAt, time, duration))) continue;
        t.worstExcess = excess;
        t.excessOf = `${w.name}, half-cycle ${halfCycle}, ${start + time} s`;
      }
    }
    const segment = new Segment(mode, coordinates, start, duration, halfCycle);
    audited.reported.forEach(([own, output], k) => {
      for (let j = 0; j <= SAMPLES; j++) {
        const [a, b] = [visit.value(own, (j / SAMPLES) * duration), segment.value(output, (j / SAMPLES) * duration)];
        // against the largest seen so far of this output, and at least a volt or an ampere
        this.reportedSizes[k] = Math.max(this.reportedSizes[k] ?? 1, Math.abs(a));
        t.worstReported = Math.max(t.worstReported, Math.abs(a - b) / (this.reportedSizes[k] ?? 1));
      }
    });
    t.worstState = this.worst(this.mismatches);
    t.worstJump = this.worst(this.jumps);
  }

  /** whether what is outside at `time` was inside a shortest step before or after: such a double crossing may go unnoticed */
  private isBrief(excessAt: (time: number) => number, time: number, duration: number): boolean {
    const shortest = this.run.halfPeriod / 2 ** LADDER_LEVELS;
    const inside = (at: number): boolean => at <= 0 || at >= duration || excessAt(at) <= EXCESS_ALLOWED;
    const extent = (towards: 1 | -1): number => {
      for (let k = 1; k <= 16; k++) if (inside(time + (towards * k * shortest) / 16)) return (k * shortest) / 16;
      return 2 * shortest;
    };
    return extent(-1) + extent(1) <= (1 + 2 / 16) * shortest;
  }

  private worst(of: Float64Array): number {
    const inductors = new Map(this.circuit.inductors.map((l) => [l.state, l.storage]));
    const { peak } = this.run.network;
    return of.reduce((most, x, k) => {
      const inductance = inductors.get(k);
      // a capacitor's voltage against the largest it had; an inductor's flux against what the mains gives in a half-cycle
      return Math.max(most, inductance === undefined ? x / (this.largest[k] ?? 1) : (x * inductance) / (peak * this.run.halfPeriod));
    }, 0);
  }

  /**
   * Energy not accounted for, relative to what flowed. Where a constant current drains a reservoir, the audit's integrals run over
   * modal coordinates of 1e5 sqrt(J) that nearly cancel (the leak that bounds them is 1 GOhm); their rounding is taken off.
   */
  get imbalance(): number {
    const t = this.totals;
    const open = Math.abs(t.drawn - t.heat - (t.storedAfter - (t.storedBefore ?? 0)));
    return Math.max(0, open - 8 * Number.EPSILON * this.largestCoordinate ** 2) / Math.max(t.gross, 1e-12);
  }
}
