/** A sine cut at the firing angle into a resistor: power, r.m.s. and mean value and the fundamental, against their closed forms. */
import { describe, test } from 'vitest';
import { OUTPUT } from '../../../model/circuit/configuration.ts';
import type { Segment } from '../../../model/engine/segment.ts';
import { Deviations } from '../../support/model-deviations.ts';
import { firedAt, idealDimmer, pairing, peakOf, resistor, SWITCH_RESISTANCE, stiff } from '../../support/model-pairings.ts';
import { settledPair, total } from '../../support/model-run.ts';
import data from './phase-cut.cases.json' with { type: 'json' };

const RESISTANCE = 100;
/** of the source, the switch and the lamp's lead */
const IN_SERIES = 1e-3 + SWITCH_RESISTANCE + 1e-3;
const deviations = new Deviations('phase-cut sine into a resistor');

/** integral of the line current times a sine or cosine of the mains' angle, by Gauss-Legendre over pieces of a segment */
function fourier(segment: Segment, omega: number, of: (angle: number) => number): number {
  const nodes = [-0.7745966692414834, 0, 0.7745966692414834];
  const weights = [5 / 9, 8 / 9, 5 / 9];
  const pieces = 40;
  const half = segment.duration / pieces / 2;
  let sum = 0;
  for (let piece = 0; piece < pieces; piece++) {
    nodes.forEach((node, k) => {
      const s = (2 * piece + 1 + node) * half;
      sum += (weights[k] as number) * half * segment.value(OUTPUT.lineCurrent, s) * of(omega * (segment.start + s));
    });
  }
  return sum;
}

describe.each([stiff(230, 50), stiff(120, 60)])('a resistor on $voltage V, $frequency Hz', (mains) => {
  test.each(data.cases)('fired at $firingAngle_deg degrees takes the closed form of power, r.m.s., mean and fundamental', (c) => {
    const [positive, negative] = settledPair(pairing(mains, idealDimmer({ drive: firedAt(c.firingAngle_deg) }), resistor(RESISTANCE)), 2);
    const halfPeriod = 1 / (2 * mains.frequency);
    const current = peakOf(mains) / (RESISTANCE + IN_SERIES);
    const where = `${c.firingAngle_deg} degrees at ${mains.voltage} V`;
    for (const halfCycle of [positive, negative]) {
      const squared = total(halfCycle, (s) => s.productIntegral(OUTPUT.lineCurrent, OUTPUT.lineCurrent));
      const charge = total(halfCycle, (s) => s.integral(OUTPUT.lineCurrent));
      const energy = total(halfCycle, (s) => s.productIntegral(OUTPUT.lampVoltage, OUTPUT.lampCurrent));
      // with the lamp's lead, whose milliohm counts as lamp
      const undimmed = (current ** 2 / 2) * (RESISTANCE + 1e-3) * halfPeriod;
      deviations.relative('power (relative)', where, energy / undimmed, c.powerShare, 1e-4);
      deviations.relative('r.m.s. current (relative)', where, Math.sqrt((2 * squared) / halfPeriod) / current, c.rmsShare, 1e-4);
      deviations.relative('mean current (relative)', where, Math.abs(charge) / halfPeriod / current, c.meanShare, 1e-4);
    }
    const omega = 2 * Math.PI * mains.frequency;
    const inPhase = total(positive, (s) => fourier(s, omega, Math.sin)) * (2 / halfPeriod);
    const quadrature = total(positive, (s) => fourier(s, omega, Math.cos)) * (2 / halfPeriod);
    deviations.relative('fundamental (relative)', where, Math.hypot(inPhase, quadrature) / current, c.fundamentalShare, 1e-4);
    const lag = (Math.atan2(-quadrature, inPhase) * 180) / Math.PI;
    deviations.absolute('lag of the fundamental (degrees)', where, lag, c.fundamentalLag_deg, 1e-3);
  });
});
