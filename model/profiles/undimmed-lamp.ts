/**
 * A lamp straight on a stiff sine, simulated by the same engine as every verdict: the dimmer is replaced by a switch that is always
 * closed. Gives current against phase, power and power factor once the lamp repeats itself.
 */
import { OUTPUT } from '../circuit/configuration.ts';
import { layNetwork } from '../circuit/network.ts';
import { DimmerRun } from '../engine/dimmer-run.ts';
import { Segment } from '../engine/segment.ts';
import { RepeatWatch } from '../engine/settling.ts';
import type { Dimmer, Lamp, Pairing } from '../pairing.ts';
import { UNDIMMED_BUDGET, UNDIMMED_LATCHING, UNDIMMED_RESISTANCE } from './profile-tolerances.ts';

export interface Sine {
  /** V r.m.s., Hz */
  readonly voltage: number;
  readonly frequency: number;
}

export interface UndimmedLamp {
  /** W, A r.m.s.; power factor 0..1 */
  readonly power: number;
  readonly rmsCurrent: number;
  readonly powerFactor: number;
  /** A at a phase in degrees from the rising zero crossing */
  currentAt(phase: number): number;
}

const never = { positive: UNDIMMED_LATCHING, negative: UNDIMMED_LATCHING };

const CLOSED: Dimmer = {
  latchingCurrent: never,
  holdingCurrent: never,
  typicalLatchingCurrent: null,
  typicalHoldingCurrent: null,
  turnOffTime: 0,
  onVoltage: 0,
  onResistance: UNDIMMED_RESISTANCE,
  wiring: 'three-wire',
  choke: { inductance: 0, resistance: UNDIMMED_RESISTANCE, lossResistance: null },
  snubber: null,
  interferenceCapacitance: 0,
  ratings: { maximumCurrent: null, maximumPeakCurrent: null, minimumLoad: null, maximumLoad: null },
  drive: { kind: 'timed', firingAngleFull: 0, firingAngleLow: 0, gatePulse: 1, pulses: 'held', pulseSpacing: 1 },
};

/** null where the lamp does not come to repeat itself: there is no undimmed current to speak of */
export function runUndimmed(lamp: Lamp, sine: Sine): UndimmedLamp | null {
  const pairing: Pairing = {
    mains: { ...sine, sourceResistance: UNDIMMED_RESISTANCE },
    dimmer: CLOSED,
    lamps: [{ count: 1, lamp }],
    addedLoad: null,
  };
  const network = layNetwork(pairing);
  const run = new DimmerRun(network, CLOSED);
  const watch = new RepeatWatch(network);
  run.setDial(100);
  for (let period = 0, k = 0; period !== 1 && period !== 2; k++) {
    if (k === UNDIMMED_BUDGET) return null;
    const { outcome, record } = run.finishHalfCycle();
    if (outcome === 'undecided') return null;
    run.state(watch.slot);
    period = watch.note(record);
  }
  const first = run.index;
  const segments: Segment[] = [];
  run.segmentListener = {
    segment(mode, coordinates, start, duration, halfCycle) {
      segments.push(new Segment(mode, coordinates, start, duration, halfCycle));
    },
  };
  for (let k = 0; k < 2; k++) if (run.finishHalfCycle().outcome === 'undecided') return null;
  return measured(segments, first, run.halfPeriod, sine.voltage);
}

function measured(segments: readonly Segment[], first: number, halfPeriod: number, voltage: number): UndimmedLamp {
  let energy = 0;
  let squared = 0;
  for (const s of segments) {
    energy += s.productIntegral(OUTPUT.lampVoltage, OUTPUT.lampCurrent);
    squared += s.productIntegral(OUTPUT.lampCurrent, OUTPUT.lampCurrent);
  }
  const power = energy / (2 * halfPeriod);
  const rmsCurrent = Math.sqrt(Math.max(0, squared) / (2 * halfPeriod));
  return {
    power,
    rmsCurrent,
    powerFactor: rmsCurrent > 0 ? power / (voltage * rmsCurrent) : 0,
    currentAt(phase) {
      const turned = ((phase % 360) + 360) % 360;
      const polarity = first % 2;
      const halfCycle = first + ((Math.floor(turned / 180) + polarity) % 2);
      const at = ((turned % 180) / 180) * halfPeriod;
      const segment = segments.findLast((s) => s.halfCycle === halfCycle && s.start <= at) ?? (segments[0] as Segment);
      return segment.value(OUTPUT.lampCurrent, Math.min(segment.duration, at - segment.start));
    },
  };
}
