/**
 * Nodal analysis for the tests: node voltages and capacitor currents as linear functions of given columns (states, sources, constants).
 * Every quantity is a row over the columns; elements without memory are stamped, those with memory are sources.
 */
import { type Branch, type Circuit, NEUTRAL } from './model-circuit.ts';

/** a quantity as a linear function of the columns */
export type Row = Float64Array;

export class NodeEquations {
  readonly columns: number;
  private readonly circuit: Circuit;
  private readonly size: number;
  private readonly matrix: Float64Array;
  private readonly right: Float64Array;

  /** columns: the states as volts and amperes, then the mains' volts, then `extra` others */
  constructor(circuit: Circuit, extra: number) {
    this.circuit = circuit;
    const states = circuit.storages.length;
    this.columns = states + 1 + extra;
    this.size = circuit.nodes + circuit.capacitors.length;
    this.matrix = new Float64Array(this.size * this.size);
    this.right = new Float64Array(this.size * this.columns);
    for (const r of circuit.resistors) this.conductance(r, 1 / r.resistance);
    const { node, resistance } = circuit.source;
    this.conductance({ a: node, b: NEUTRAL }, 1 / resistance);
    this.current({ a: NEUTRAL, b: node }, states, 1 / resistance);
    for (const l of circuit.inductors) this.current(l, l.state, 1);
    circuit.capacitors.forEach((c, k) => {
      const unknown = circuit.nodes + k;
      this.put(c.a, unknown, 1);
      this.put(c.b, unknown, -1);
      this.put(unknown, c.a, 1);
      this.put(unknown, c.b, -1);
      this.right[unknown * this.columns + c.state] = 1;
    });
  }

  private put(row: number, column: number, value: number): void {
    if (row === NEUTRAL || column === NEUTRAL) return;
    this.matrix[row * this.size + column] = (this.matrix[row * this.size + column] ?? 0) + value;
  }

  conductance({ a, b }: Branch, g: number): void {
    this.put(a, a, g);
    this.put(b, b, g);
    this.put(a, b, -g);
    this.put(b, a, -g);
  }

  /** a current from a to b, as a multiple of a column */
  current({ a, b }: Branch, column: number, value: number): void {
    if (a !== NEUTRAL) this.right[a * this.columns + column] = (this.right[a * this.columns + column] ?? 0) - value;
    if (b !== NEUTRAL) this.right[b * this.columns + column] = (this.right[b * this.columns + column] ?? 0) + value;
  }

  /** solves for the unknowns; gives the voltage between two nodes and the current of a capacitor as rows */
  solve(): { voltage: (branch: Branch) => Row; capacitorCurrent: (index: number) => Row } {
    const { size, columns } = this;
    const m = Float64Array.from(this.matrix);
    const r = Float64Array.from(this.right);
    for (let k = 0; k < size; k++) {
      let pivot = k;
      for (let i = k + 1; i < size; i++) if (Math.abs(m[i * size + k] ?? 0) > Math.abs(m[pivot * size + k] ?? 0)) pivot = i;
      if (pivot !== k) {
        for (const [array, width] of [
          [m, size],
          [r, columns],
        ] as const) {
          const row = array.slice(k * width, (k + 1) * width);
          array.copyWithin(k * width, pivot * width, (pivot + 1) * width);
          array.set(row, pivot * width);
        }
      }
      const head = m[k * size + k] ?? 0;
      for (let i = 0; i < size; i++) {
        const factor = i === k ? 0 : (m[i * size + k] ?? 0) / head;
        if (factor === 0) continue;
        for (let c = k; c < size; c++) m[i * size + c] = (m[i * size + c] ?? 0) - factor * (m[k * size + c] ?? 0);
        for (let c = 0; c < columns; c++) r[i * columns + c] = (r[i * columns + c] ?? 0) - factor * (r[k * columns + c] ?? 0);
      }
    }
    for (let k = 0; k < size; k++)
      for (let c = 0; c < columns; c++) r[k * columns + c] = (r[k * columns + c] ?? 0) / (m[k * size + k] ?? 0);
    const unknown = (k: number): Row => (k === NEUTRAL ? new Float64Array(columns) : r.slice(k * columns, (k + 1) * columns));
    return {
      voltage: ({ a, b }) => {
        const at = unknown(b);
        return unknown(a).map((v, c) => v - (at[c] ?? 0));
      },
      // the unknown is the current that the branch takes out of its node a
      capacitorCurrent: (index) => unknown(this.circuit.nodes + index),
    };
  }
}
