/** Keeps what a half-cycle passed through, and makes segments of it only when asked: most half-cycles only settle. */
import type { SegmentListener } from '../engine/dimmer-run.ts';
import type { Mode } from '../engine/mode.ts';
import { Segment } from '../engine/segment.ts';

export class SegmentLog implements SegmentListener {
  private readonly modes: Mode[] = [];
  private readonly starts: number[] = [];
  private readonly durations: number[] = [];
  private coordinates = new Float64Array(0);
  private width = 0;
  private halfCycle = 0;
  private count = 0;

  /** forgets the half-cycle before */
  begin(): void {
    this.count = 0;
  }

  segment(mode: Mode, coordinates: Float64Array, start: number, duration: number, halfCycle: number): void {
    const at = this.count++;
    this.width = coordinates.length;
    this.halfCycle = halfCycle;
    if (this.coordinates.length < this.count * this.width) {
      const more = new Float64Array(2 * this.count * this.width);
      more.set(this.coordinates);
      this.coordinates = more;
    }
    for (let k = 0, to = at * this.width; k < this.width; k++, to++) this.coordinates[to] = coordinates[k] as number;
    this.modes[at] = mode;
    this.starts[at] = start;
    this.durations[at] = duration;
  }

  /** in order */
  segments(): Segment[] {
    const { width } = this;
    return Array.from({ length: this.count }, (_, k) => {
      const coordinates = this.coordinates.subarray(k * width, (k + 1) * width);
      return new Segment(this.modes[k] as Mode, coordinates, this.starts[k] as number, this.durations[k] as number, this.halfCycle);
    });
  }
}
