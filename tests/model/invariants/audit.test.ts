/** Every generated circuit, audited segment by segment against a second description of it: energy, charge, continuity, regions, outputs. */
import fc from 'fast-check';
import { describe, test } from 'vitest';
import { builtPairings, dialPositions, PATIENCE, runsOf } from '../../support/model-arbitrary.ts';
import { Audit, EXCESS_ALLOWED } from '../../support/model-audit.ts';
import { Deviations } from '../../support/model-deviations.ts';
import { startRun } from '../../support/model-run.ts';

const HALF_CYCLES = 4;
const deviations = new Deviations('audit of generated circuits (relative, or V and A)');

describe('a generated circuit', () => {
  test('draws from the mains what it heats and stores, moves charge as its currents say, and keeps every part within its region', {
    timeout: PATIENCE,
  }, () => {
    fc.assert(
      fc.property(builtPairings, dialPositions, (pairing, dial) => {
        const run = startRun(pairing, dial);
        const audit = new Audit(pairing, run, dial);
        run.segmentListener = audit;
        for (let k = 0; k < HALF_CYCLES; k++) if (run.finishHalfCycle().outcome !== 'done') break;
        const { totals } = audit;
        const where = `${totals.segments} segments`;
        deviations.absolute('energy not accounted for, share of what flowed', where, audit.imbalance, 0, 1e-6);
        deviations.absolute('change of a state against its charge or flux', where, totals.worstState, 0, 1e-3);
        deviations.absolute('jump of a state across a switch', where, totals.worstJump, 0, 1e-5);
        deviations.absolute('excess over a region (V or A)', totals.excessOf, totals.worstExcess, 0, EXCESS_ALLOWED);
        deviations.absolute('a reported output against its own definition', where, totals.worstReported, 0, 1e-7);
      }),
      runsOf(60),
    );
  });
});
