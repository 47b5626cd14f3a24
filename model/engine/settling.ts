/**
 * Notices when the circuit repeats itself: after each half-cycle every state is compared with the one p half-cycles earlier, mirrored
 * for odd p, for p = 1 .. LONGEST_PERIOD. A pattern counts as found once it has held for a whole period and at least two half-cycles,
 * with the same number of firings. A circuit whose polarities differ can only repeat after an even number of half-cycles.
 */
import type { Network } from '../circuit/network.ts';
import { numbers } from '../numbers.ts';
import { LONGEST_PERIOD, REPEAT_FLOOR, REPEAT_TOLERANCE } from '../tolerances.ts';
import type { HalfCycle } from './half-cycle.ts';

const DEPTH = LONGEST_PERIOD + 1;

export class RepeatWatch {
  private readonly states: Float64Array[];
  private readonly floors: Float64Array;
  private readonly mirror: Float64Array;
  private readonly firings = new Int32Array(DEPTH);
  private readonly held = new Int32Array(DEPTH);
  private seen = 0;

  constructor(network: Network) {
    const n = network.states;
    this.states = Array.from({ length: DEPTH }, () => numbers(n));
    this.floors = numbers(n);
    this.mirror = numbers(n).fill(-1);
    const inductors = new Set(network.inductors.map((l) => l.state));
    for (let k = 0; k < n; k++) {
      // a current is weighed as if the mains drove it through 1 kOhm
      const typical = inductors.has(k) ? network.peak / 1000 : network.peak;
      this.floors[k] = REPEAT_FLOOR * typical * (network.scale[k] as number);
    }
    for (const g of network.groups) if (g.reservoir !== null) this.mirror[g.reservoir.state] = 1;
  }

  /** to be called when something outside the circuit changed (the dial) */
  reset(): void {
    this.seen = 0;
    this.held.fill(0);
  }

  /** slot of the half-cycle about to be noted: the caller fills in its final state */
  get slot(): Float64Array {
    return this.states[this.seen % DEPTH] as Float64Array;
  }

  /** notes the half-cycle whose final state has been put into `slot`; the period that repeats, or 0 */
  note(record: HalfCycle): number {
    const now = this.seen % DEPTH;
    const state = this.states[now] as Float64Array;
    this.firings[now] = record.firings.length;
    this.seen++;
    let found = 0;
    for (let p = 1; p <= LONGEST_PERIOD && p < this.seen; p++) {
      const then = (now - p + DEPTH) % DEPTH;
      const same = this.firings[then] === this.firings[now] && this.close(state, this.states[then] as Float64Array, p % 2 === 1);
      const held = same ? (this.held[p] as number) + 1 : 0;
      this.held[p] = held;
      if (found === 0 && held >= Math.max(2, p)) found = p;
    }
    return found;
  }

  private close(a: Float64Array, b: Float64Array, mirrored: boolean): boolean {
    for (let k = 0; k < a.length; k++) {
      const x = a[k] as number;
      const y = (b[k] as number) * (mirrored ? (this.mirror[k] as number) : 1);
      const allowed = Math.max(REPEAT_TOLERANCE * Math.max(Math.abs(x), Math.abs(y)), this.floors[k] as number);
      if (Math.abs(x - y) > allowed) return false;
    }
    return true;
  }
}
