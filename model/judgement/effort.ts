/** Adds up the work that one question took, over all its sweeps. */
import type { Counters, Effort } from '../verdict.ts';

export class EffortTally {
  private counters: Counters = { halfCycles: 0, steps: 0, events: 0, modesBuilt: 0 };
  private stops = 0;
  private sparedStops = 0;

  add({ halfCycles, steps, events, modesBuilt }: Counters): void {
    const sum = this.counters;
    this.counters = {
      halfCycles: sum.halfCycles + halfCycles,
      steps: sum.steps + steps,
      events: sum.events + events,
      modesBuilt: sum.modesBuilt + modesBuilt,
    };
  }

  visited(stops: number): void {
    this.stops += stops;
  }

  spared(stops: number): void {
    this.sparedStops += stops;
  }

  get total(): Effort {
    return { ...this.counters, stops: this.stops, sparedStops: this.sparedStops };
  }
}
