/**
 * Assembles the linear system of one configuration by nodal analysis: capacitors as voltage sources, inductors as current sources,
 * everything else a conductance. The result gives the derivative of every state and every output as a linear function of the states,
 * the mains sine and one constant per switching part. The timing resistor, the only part that the dial moves, is left open as a port
 * and folded in afterwards (a rank-one change), so that a dial change does not repeat the nodal analysis.
 */
import { numbers } from '../numbers.ts';
import type { Dimmer } from '../pairing.ts';
import { BRIDGE_DROP, LEAST_RESISTANCE, RESERVOIR_LEAKAGE } from '../tolerances.ts';
import type { Configuration, GroupConfiguration } from './configuration.ts';
import { GROUP_OUTPUT, GROUP_OUTPUTS, GROUPS_FROM, OUTPUT } from './configuration.ts';
import type { Curve, CurveSegment } from './lamp-curve.ts';
import { NEUTRAL, type Network } from './network.ts';

/** constants: one column for the triac's drop, one for the diac's, one per group; each is used with its part's sign */
export const TRIAC_CONSTANT = 0;
export const DIAC_CONSTANT = 1;
export const GROUP_CONSTANTS = 2;

/** rows: n derivatives, then the outputs; columns: n states, the mains sine (unit amplitude), the constants */
export interface ModeSystem {
  readonly states: number;
  readonly outputs: number;
  readonly constants: number;
  readonly columns: number;
  readonly rows: Float64Array;
}

/** a mode system whose timing resistor is still a port: one more column (port current) and one more row (port voltage), both last */
export interface OpenModeSystem extends ModeSystem {
  readonly hasPort: boolean;
}

/** knee of the triac's on-characteristic, A: below it the drop falls straight to zero, so that a current that rings through zero
 * meets no jump. It lies at the holding current, below which the triac is on its way out anyway. */
export function triacKnee(dimmer: Dimmer): number {
  return Math.min(dimmer.holdingCurrent.positive, dimmer.holdingCurrent.negative);
}

/** LU with partial pivoting, in place, on an m x width system whose first m columns are the matrix. A node that nothing holds makes it singular. */
function solveInPlace(matrix: Float64Array, m: number, width: number): void {
  for (let k = 0; k < m; k++) {
    let pivot = k;
    for (let r = k + 1; r < m; r++) {
      if (Math.abs(matrix[r * width + k] as number) > Math.abs(matrix[pivot * width + k] as number)) pivot = r;
    }
    if (pivot !== k) {
      for (let c = k; c < width; c++) {
        const t = matrix[k * width + c] as number;
        matrix[k * width + c] = matrix[pivot * width + c] as number;
        matrix[pivot * width + c] = t;
      }
    }
    const head = matrix[k * width + k] as number;
    if (head === 0) throw new Error('singular nodal matrix: the circuit layout left a node undetermined');
    for (let c = k; c < width; c++) matrix[k * width + c] = (matrix[k * width + c] as number) / head;
    for (let r = 0; r < m; r++) {
      const factor = r === k ? 0 : (matrix[r * width + k] as number);
      if (factor === 0) continue;
      for (let c = k; c < width; c++) {
        matrix[r * width + c] = (matrix[r * width + c] as number) - factor * (matrix[k * width + c] as number);
      }
    }
  }
}

export function openModeSystem(network: Network, dimmer: Dimmer, configuration: Configuration): OpenModeSystem {
  const n = network.states;
  const constants = GROUP_CONSTANTS + network.groups.length;
  const drive = n;
  const firstConstant = n + 1;
  const hasPort = network.timing !== null;
  const port = firstConstant + constants;
  const columns = port + (hasPort ? 1 : 0);
  const fixed = network.capacitors.filter((b) => b.resistance === 0);
  const m = network.nodes + fixed.length;
  const width = m + columns;
  const matrix = numbers(m * width);
  const scale = (state: number): number => network.scale[state] as number;

  const add = (row: number, column: number, value: number): void => {
    if (row !== NEUTRAL && column !== NEUTRAL) matrix[row * width + column] = (matrix[row * width + column] as number) + value;
  };
  const conduct = (a: number, b: number, g: number): void => {
    add(a, a, g);
    add(b, b, g);
    add(a, b, -g);
    add(b, a, -g);
  };
  /** a current that flows from a to b through an element, as a multiple of a column */
  const inject = (a: number, b: number, column: number, value: number): void => {
    add(a, m + column, -value);
    add(b, m + column, value);
  };

  for (const c of network.conductors) conduct(c.a, c.b, c.conductance);
  conduct(network.sourceNode, NEUTRAL, network.sourceConductance);
  inject(NEUTRAL, network.sourceNode, drive, network.sourceConductance * network.peak);
  for (const b of network.capacitors) {
    if (b.resistance === 0) continue;
    conduct(b.a, b.b, 1 / b.resistance);
    inject(b.a, b.b, b.state, -1 / (b.resistance * scale(b.state)));
  }
  fixed.forEach((b, k) => {
    const unknown = network.nodes + k;
    add(b.a, unknown, 1);
    add(b.b, unknown, -1);
    add(unknown, b.a, 1);
    add(unknown, b.b, -1);
    add(unknown, m + b.state, 1 / scale(b.state));
  });
  for (const b of network.inductors) inject(b.a, b.b, b.state, 1 / scale(b.state));

  const { dimmerNode: d, lampNode: a, timing } = network;
  const triacConductance =
    configuration.triac === 'open'
      ? 0
      : 1 / (Math.max(dimmer.onResistance, LEAST_RESISTANCE) + (configuration.triac === 'low' ? dimmer.onVoltage / triacKnee(dimmer) : 0));
  const triacOffset = configuration.triac === 'on' ? -dimmer.onVoltage * triacConductance : 0;
  conduct(d, a, triacConductance);
  inject(d, a, firstConstant + TRIAC_CONSTANT, triacOffset);

  let diacConductance = 0;
  let diacOffset = 0;
  if (timing !== null && dimmer.drive.kind === 'diac') {
    if (configuration.diac) {
      diacConductance = 1 / (dimmer.drive.diacResistance + dimmer.drive.gateResistance);
      diacOffset = -(dimmer.drive.residualVoltage + dimmer.drive.gateVoltage) * diacConductance;
      conduct(timing.diacNode, timing.reference, diacConductance);
      inject(timing.diacNode, timing.reference, firstConstant + DIAC_CONSTANT, diacOffset);
    }
    inject(timing.resistorFrom, timing.resistorTo, port, 1);
  }

  const groupParts = network.groups.map((part, k) => {
    const g = configuration.groups[k] as GroupConfiguration;
    const column = firstConstant + GROUP_CONSTANTS + k;
    const segment = part.curve?.[g.segment];
    const reservoir = part.reservoir;
    const charges = reservoir !== null && g.conducting;
    if (segment !== undefined && (!charges || g.topped)) {
      conduct(part.node, NEUTRAL, segment.slope);
      inject(part.node, NEUTRAL, column, segment.offset);
    } else if (charges) {
      conduct(part.node, NEUTRAL, 1 / reservoir.surgeResistance);
      inject(part.node, NEUTRAL, column, -BRIDGE_DROP / reservoir.surgeResistance);
      inject(part.node, NEUTRAL, reservoir.state, -1 / (reservoir.surgeResistance * scale(reservoir.state)));
    }
    return { part, g, column, segment, reservoir, charges };
  });

  solveInPlace(matrix, m, width);

  const outputs = GROUPS_FROM + GROUP_OUTPUTS * network.groups.length;
  const rowCount = n + outputs + (hasPort ? 1 : 0);
  const rows = numbers(rowCount * columns);
  const accumulate = (row: number, unknown: number, factor: number): void => {
    if (unknown === NEUTRAL || factor === 0) return;
    for (let c = 0; c < columns; c++) {
      rows[row * columns + c] = (rows[row * columns + c] as number) + factor * (matrix[unknown * width + m + c] as number);
    }
  };
  const put = (row: number, column: number, value: number): void => {
    rows[row * columns + column] = (rows[row * columns + column] as number) + value;
  };
  const difference = (row: number, p: number, q: number, factor: number): void => {
    accumulate(row, p, factor);
    accumulate(row, q, -factor);
  };

  fixed.forEach((b, k) => {
    accumulate(b.state, network.nodes + k, 1 / scale(b.state));
  });
  for (const b of network.capacitors) {
    if (b.resistance === 0) continue;
    const factor = 1 / (b.resistance * scale(b.state));
    difference(b.state, b.a, b.b, factor);
    put(b.state, b.state, -factor / scale(b.state));
  }
  for (const b of network.inductors) difference(b.state, b.a, b.b, 1 / scale(b.state));

  const output = (k: number): number => n + k;
  accumulate(output(OUTPUT.lineCurrent), network.sourceNode, -network.sourceConductance);
  put(output(OUTPUT.lineCurrent), drive, network.sourceConductance * network.peak);
  difference(output(OUTPUT.triacCurrent), d, a, triacConductance);
  put(output(OUTPUT.triacCurrent), firstConstant + TRIAC_CONSTANT, triacOffset);
  difference(output(OUTPUT.triacVoltage), d, a, 1);
  accumulate(output(OUTPUT.lampVoltage), a, 1);
  for (const input of network.inputs) difference(output(OUTPUT.lampCurrent), a, input.to, input.conductance);
  if (timing !== null) {
    difference(output(OUTPUT.timingVoltage), timing.diacNode, timing.reference, 1);
    difference(output(OUTPUT.diacCurrent), timing.diacNode, timing.reference, diacConductance);
    put(output(OUTPUT.diacCurrent), firstConstant + DIAC_CONSTANT, diacOffset);
    difference(output(outputs), timing.resistorFrom, timing.resistorTo, 1);
  }

  groupParts.forEach(({ part, column, segment, reservoir, charges, g }, k) => {
    const base = n + GROUPS_FROM + k * GROUP_OUTPUTS;
    accumulate(base + GROUP_OUTPUT.voltage, part.node, 1);
    if (reservoir === null) return;
    const volts = 1 / scale(reservoir.state);
    accumulate(base + GROUP_OUTPUT.bridge, part.node, 1);
    put(base + GROUP_OUTPUT.bridge, reservoir.state, -volts);
    accumulate(base + GROUP_OUTPUT.bridgeReversed, part.node, 1);
    put(base + GROUP_OUTPUT.bridgeReversed, reservoir.state, volts);
    put(base + GROUP_OUTPUT.reservoir, reservoir.state, volts);
    const derivative = reservoir.state;
    const drain = (reservoir.drain as Curve)[g.drain] as CurveSegment;
    const perFarad = 1 / scale(reservoir.state);
    put(derivative, reservoir.state, -(drain.slope + 1 / RESERVOIR_LEAKAGE) * volts * perFarad);
    put(derivative, column, -drain.offset * perFarad);
    if (charges) {
      const g1 = 1 / reservoir.surgeResistance;
      const chargeInto = (row: number, factor: number): void => {
        accumulate(row, part.node, g1 * factor);
        put(row, reservoir.state, -g1 * volts * factor);
        put(row, column, -g1 * BRIDGE_DROP * factor);
      };
      chargeInto(derivative, perFarad);
      chargeInto(base + GROUP_OUTPUT.excess, 1);
    }
    if (segment !== undefined) {
      accumulate(base + GROUP_OUTPUT.excess, part.node, -segment.slope);
      put(base + GROUP_OUTPUT.excess, column, -segment.offset);
    }
  });
  return { states: n, outputs, constants, columns, rows, hasPort };
}

/** 1/Ohm: closed by a timing resistance, an open system's port adds this times its column times its row */
export function portGain({ rows, columns, states, outputs }: OpenModeSystem, timingResistance: number): number {
  return 1 / (timingResistance - (rows[(states + outputs) * columns + columns - 1] as number));
}

/** scratch: the rows of the system that was closed last */
let closedRows = new Float64Array(0);

/** Folds the timing resistor (Ohm; ignored without a port) into the open system. The rows are good until the next one is closed. */
export function closeModeSystem(open: OpenModeSystem, timingResistance: number): ModeSystem {
  const { states, outputs, constants } = open;
  if (!open.hasPort) return open;
  const columns = states + 1 + constants;
  const count = states + outputs;
  if (closedRows.length < count * columns) closedRows = new Float64Array(count * columns);
  const rows = closedRows;
  const from = open.rows;
  const portColumn = open.columns - 1;
  const portRow = count * open.columns;
  const gain = portGain(open, timingResistance);
  for (let r = 0, at = 0; r < count; r++) {
    const own = r * open.columns;
    const share = (from[own + portColumn] as number) * gain;
    for (let c = 0; c < columns; c++, at++) rows[at] = (from[own + c] as number) + share * (from[portRow + c] as number);
  }
  return { states, outputs, constants, columns, rows };
}
