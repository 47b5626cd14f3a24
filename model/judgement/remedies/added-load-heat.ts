/** What an added load turns to heat, and what voltage it sees, over the whole dial at one corner. */
import { OUTPUT } from '../../circuit/configuration.ts';
import type { SegmentListener } from '../../engine/dimmer-run.ts';
import type { Mode } from '../../engine/mode.ts';
import { Segment } from '../../engine/segment.ts';
import type { AddedLoad, Pairing } from '../../pairing.ts';
import type { CornerInputs, JudgeOptions } from '../../verdict.ts';
import { atCorner } from '../corners.ts';
import { walkDial } from '../dial-visit.ts';
import type { EffortTally } from '../effort.ts';

export interface AddedLoadHeat {
  /** W, at the dial position where it is most */
  readonly power: number;
  /** %, that position */
  readonly position: number;
  /** V r.m.s. and V peak across it, the most over the dial */
  readonly rmsVoltage: number;
  readonly peakVoltage: number;
}

/** Integrates over the observed half-cycles of one stop. */
class HeatMeter implements SegmentListener {
  private squaredVoltage = 0;
  private squaredCurrent = 0;
  private time = 0;
  private peak = 0;

  segment(mode: Mode, coordinates: Float64Array, start: number, duration: number, halfCycle: number): void {
    const segment = new Segment(mode, coordinates, start, duration, halfCycle);
    const product = (a: number, b: number): number => segment.productIntegral(a, b);
    const { lineCurrent, lampCurrent, lampVoltage } = OUTPUT;
    this.squaredVoltage += product(lampVoltage, lampVoltage);
    // what comes through the dimmer and does not pass the lamps passes the added load (three-wire: besides the timing branch's mA)
    this.squaredCurrent += product(lineCurrent, lineCurrent) - 2 * product(lineCurrent, lampCurrent) + product(lampCurrent, lampCurrent);
    this.peak = segment.peak(lampVoltage, this.peak);
    this.time += duration;
  }

  /** mean square voltage and current, and peak, since the last call */
  read(): { readonly voltage: number; readonly current: number; readonly peak: number } {
    const time = this.time || 1;
    const read = { voltage: this.squaredVoltage / time, current: this.squaredCurrent / time, peak: this.peak };
    this.squaredVoltage = this.squaredCurrent = this.time = this.peak = 0;
    return read;
  }
}

export function addedLoadHeat(
  pairing: Pairing,
  load: AddedLoad,
  corner: CornerInputs,
  options: JudgeOptions,
  effort: EffortTally,
): AddedLoadHeat {
  const meter = new HeatMeter();
  let most: AddedLoadHeat = { power: 0, position: 0, rmsVoltage: 0, peakVoltage: 0 };
  walkDial(atCorner({ ...pairing, addedLoad: load }, corner), options, effort, meter, ({ position }) => {
    const { voltage, current, peak } = meter.read();
    const power = load.kind === 'resistor' ? voltage / load.resistance : current * load.resistance;
    most = {
      power: Math.max(power, most.power),
      position: power > most.power ? position : most.position,
      rmsVoltage: Math.max(Math.sqrt(voltage), most.rmsVoltage),
      peakVoltage: Math.max(peak, most.peakVoltage),
    };
    return false;
  });
  return most;
}
