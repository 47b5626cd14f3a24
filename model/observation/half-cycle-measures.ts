/** Adds up what each observed half-cycle delivered, from the segments the run passed through. */
import { OUTPUT } from '../circuit/configuration.ts';
import type { SegmentListener } from '../engine/dimmer-run.ts';
import type { Mode } from '../engine/mode.ts';
import { Segment } from '../engine/segment.ts';

export interface Measures {
  /** integral of the line current, C */
  charge: number;
  /** integral of the squared line current, A^2 s */
  squaredCurrent: number;
  /** largest line current, A */
  peakCurrent: number;
  /** energy into all lamps (not the added load), J */
  lampEnergy: number;
}

export class HalfCycleMeasures implements SegmentListener {
  current: Measures = { charge: 0, squaredCurrent: 0, peakCurrent: 0, lampEnergy: 0 };

  /** segments of the half-cycle, in order */
  segments: Segment[] = [];

  begin(): void {
    this.segments = [];
    this.current = { charge: 0, squaredCurrent: 0, peakCurrent: 0, lampEnergy: 0 };
  }

  segment(mode: Mode, coordinates: Float64Array, start: number, duration: number, halfCycle: number): void {
    const segment = new Segment(mode, coordinates, start, duration, halfCycle);
    this.segments.push(segment);
    const m = this.current;
    m.charge += segment.integral(OUTPUT.lineCurrent);
    m.squaredCurrent += segment.productIntegral(OUTPUT.lineCurrent, OUTPUT.lineCurrent);
    m.lampEnergy += segment.productIntegral(OUTPUT.lampVoltage, OUTPUT.lampCurrent);
    m.peakCurrent = segment.peak(OUTPUT.lineCurrent, m.peakCurrent);
  }
}
