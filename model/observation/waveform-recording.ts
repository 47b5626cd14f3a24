/**
 * Records what the last observed half-cycles of one dial position looked like. The sweep is run again up to that position, so the
 * record belongs to the very pattern that the verdict reports; times between the simulation's events come from the closed form.
 */
import { OUTPUT } from '../circuit/configuration.ts';
import { layNetwork } from '../circuit/network.ts';
import { DimmerRun } from '../engine/dimmer-run.ts';
import { Segment } from '../engine/segment.ts';
import type { ModelFailure, Outcome } from '../failures.ts';
import type { Pairing } from '../pairing.ts';
import { checkDialPositions, checkPairing, type Issue } from '../pairing-check.ts';
import { WAVEFORM_HALF_CYCLES, WAVEFORM_SAMPLES } from '../tolerances.ts';
import type { Sweep, Waveforms } from '../verdict.ts';
import { DialObserver, OBSERVATION_PLAN } from './dial-observation.ts';
import { sweepStops } from './dial-sweep.ts';

const refuse = (issues: readonly Issue[]): { ok: false; failure: ModelFailure } => ({
  ok: false,
  failure: { kind: 'invalid-pairing', issues },
});

function sample(segments: readonly Segment[], pairing: Pairing, sweep: Sweep, position: number): Waveforms {
  const halfPeriod = 1 / (2 * pairing.mains.frequency);
  const last = segments[segments.length - 1];
  const firstHalfCycle = last === undefined ? 0 : last.halfCycle + 1 - WAVEFORM_HALF_CYCLES;
  const kept = segments.filter((s) => s.halfCycle >= firstHalfCycle);
  const times = new Set<number>();
  for (let k = 0; k <= WAVEFORM_HALF_CYCLES * WAVEFORM_SAMPLES; k++) times.add((k * halfPeriod) / WAVEFORM_SAMPLES);
  const columns: { at: number; segment: Segment; s: number }[] = [];
  for (const segment of kept) {
    const from = (segment.halfCycle - firstHalfCycle) * halfPeriod + segment.start;
    const to = from + segment.duration;
    const inside = [...times].filter((t) => t > from && t < to);
    // both edges: a switching shows as a step, not as a slope between samples
    for (const t of [from, ...inside, to]) columns.push({ at: t, segment, s: Math.min(segment.duration, t - from) });
  }
  const column = (value: (c: { at: number; segment: Segment; s: number }) => number): Float64Array => Float64Array.from(columns, value);
  const output = (k: number): Float64Array => column((c) => c.segment.value(k, c.s));
  const peak = pairing.mains.voltage * Math.SQRT2;
  const sign = Math.abs(firstHalfCycle) % 2 === 0 ? 1 : -1;
  return {
    sweep,
    position,
    time: column((c) => c.at),
    mainsVoltage: column((c) => sign * peak * Math.sin(2 * Math.PI * pairing.mains.frequency * c.at)),
    lampVoltage: output(OUTPUT.lampVoltage),
    lampCurrent: output(OUTPUT.lampCurrent),
    dimmerCurrent: output(OUTPUT.lineCurrent),
    timingVoltage: output(OUTPUT.timingVoltage),
    gateCurrent: output(OUTPUT.diacCurrent),
  };
}

export function recordWaveforms(
  pairing: Pairing,
  dialPositions: readonly number[],
  at: { readonly sweep: Sweep; readonly position: number },
): Outcome<Waveforms> {
  const issues = [...checkPairing(pairing), ...checkDialPositions(dialPositions)];
  if (issues.length > 0) return refuse(issues);
  const network = layNetwork(pairing);
  let segments: Segment[] = [];
  let observer: DialObserver | null = null;
  for (const stop of sweepStops(dialPositions)) {
    segments = [];
    observer ??= new DialObserver(new DimmerRun(network, pairing.dimmer), OBSERVATION_PLAN, {
      segment(mode, coordinates, start, duration, halfCycle) {
        segments.push(new Segment(mode, coordinates, start, duration, halfCycle));
      },
    });
    const { outcome } = observer.observe(stop.position);
    const wanted = stop.sweep === at.sweep && stop.position === at.position;
    if (outcome === 'undecided') {
      observer = null;
      if (wanted) return refuse([{ path: 'position', message: 'this dial position is undecided: there is no pattern to show' }]);
    }
    if (wanted) return { ok: true, value: sample(segments, pairing, at.sweep, at.position) };
  }
  return refuse([{ path: 'position', message: `must be one of the judged dial positions of the ${at.sweep} sweep` }]);
}
