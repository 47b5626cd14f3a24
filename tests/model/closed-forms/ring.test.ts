/**
 * The ring of a firing at the crest: choke and input capacitor in series with all resistance, the lamp drawing nothing. A triac without
 * turn-off time opens at the ring's first zero, so the end of conduction is that zero and the capacitor keeps its peak.
 */
import { describe, expect, test } from 'vitest';
import { OUTPUT } from '../../../model/circuit/configuration.ts';
import { Deviations } from '../../support/model-deviations.ts';
import { firedAt, idealDimmer, idleLamp, pairing, SWITCH_RESISTANCE } from '../../support/model-pairings.ts';
import { runFromRest } from '../../support/model-run.ts';
import data from './ring.cases.json' with { type: 'json' };

const deviations = new Deviations('ring of R, L and C after a firing (relative)');

describe.each(data.cases)('$name', (c) => {
  // slow mains: the crest stays flat for as long as the ring lasts
  const frequency = 1;
  const mains = { voltage: c.step_V / Math.SQRT2, frequency, sourceResistance: 1e-3 };
  const dimmer = idealDimmer({
    // a parallel loss of 1 GOhm is as good as none
    choke: { inductance: c.inductance_mH * 1e-3, resistance: 1e-3, lossResistance: 1e9 },
    drive: firedAt(90, { gatePulse: 1e-6 }),
  });
  const lamp = idleLamp({ seriesResistance: c.resistance_Ohm - 1e-3 - SWITCH_RESISTANCE, capacitance: c.capacitance_nF * 1e-9 });
  const [halfCycle] = runFromRest(pairing(mains, dimmer, lamp), 1);
  const fired = 1 / (4 * frequency);
  const conducting = halfCycle?.segments.filter((s) => s.start >= fired - 1e-9 && s.mode.configuration.triac !== 'open') ?? [];
  const last = conducting.at(-1);

  test('peaks at the closed form', () => {
    const peak = conducting.reduce((most, s) => s.peak(OUTPUT.lineCurrent, most), 0);
    deviations.relative('peak current', c.name, peak, c.peakCurrent_A, 1e-4);
    // the current is highest where choke and resistances leave nothing of the step: find the sign change of its slope
    const slope = (t: number): number => {
      const s = conducting.findLast((x) => x.start <= fired + t) ?? conducting[0];
      const at = fired + t - (s?.start ?? 0);
      return (s?.value(OUTPUT.lineCurrent, at + 1e-9) ?? 0) - (s?.value(OUTPUT.lineCurrent, at - 1e-9) ?? 0);
    };
    let [low, high] = [c.peakTime_us * 0.5e-6, c.peakTime_us * 1.5e-6];
    expect(slope(low)).toBeGreaterThan(0);
    for (let k = 0; k < 40; k++) {
      const middle = (low + high) / 2;
      if (slope(middle) > 0) low = middle;
      else high = middle;
    }
    deviations.relative('time of the peak', c.name, low * 1e6, c.peakTime_us, 1e-4);
  });

  if (c.firstZero_us !== null) {
    const firstZero = c.firstZero_us;
    test('ends at its first zero and leaves the capacitor at its peak', () => {
      const end = ((halfCycle?.record.ends[0] ?? 0) / 180) * (1 / (2 * frequency)) - fired;
      deviations.relative('first zero', c.name, end * 1e6, firstZero, 1e-4);
      deviations.relative('capacitor peak', c.name, last?.value(OUTPUT.lampVoltage, last.duration) ?? 0, c.capacitorPeak_V, 1e-4);
    });
  } else {
    test('does not reverse', () => {
      for (const s of conducting) {
        for (let k = 0; k <= 50; k++) expect(s.value(OUTPUT.triacCurrent, (k / 50) * s.duration)).toBeGreaterThan(-1e-6);
      }
      deviations.relative('capacitor peak', c.name, last?.value(OUTPUT.lampVoltage, last.duration) ?? 0, c.capacitorPeak_V, 1e-4);
    });
  }
});
