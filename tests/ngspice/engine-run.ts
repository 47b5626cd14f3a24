/** The model's engine on a case, from a fresh start, in the same terms as a run of ngspice. */
import { layNetwork } from '../../model/circuit/network.ts';
import { DimmerRun } from '../../model/engine/dimmer-run.ts';
import { measuresOf } from '../../model/observation/half-cycle-measures.ts';
import { SegmentLog } from '../../model/observation/segment-log.ts';
import type { Pairing } from '../../model/pairing.ts';
import type { HalfCycle } from './pattern.ts';

export function runEngine(pairing: Pairing, dial: number, halfCycles: number): HalfCycle[] {
  const run = new DimmerRun(layNetwork(pairing), pairing.dimmer);
  const log = new SegmentLog();
  run.segmentListener = log;
  run.setDial(dial);
  return Array.from({ length: halfCycles }, (_, k) => {
    log.begin();
    const { outcome, record } = run.finishHalfCycle();
    if (outcome === 'undecided') throw new Error(`the engine gave up in half-cycle ${k}`);
    // a conduction carried over from the half-cycle before counts as a firing at 0 there; here only the gate fires
    return { firingAngles: record.firings.filter((angle) => angle > 0), charge: measuresOf(log.segments()).charge };
  });
}
