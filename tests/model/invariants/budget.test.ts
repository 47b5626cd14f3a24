/** Whatever valid circuit is asked about, the answer comes within its budget and holds nothing but finite numbers. */
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { sweepDial } from '../../../model/observation/dial-sweep.ts';
import type { Pairing } from '../../../model/pairing.ts';
import { checkPairing } from '../../../model/pairing-check.ts';
import { DROP_OUT_ANGLE, STEP_BUDGET } from '../../../model/tolerances.ts';
import type { DialRow } from '../../../model/verdict.ts';
import { builtPairings, dialPositions, PATIENCE, runsOf, validPairings } from '../../support/model-arbitrary.ts';

const PLAN = { settle: 4, observe: 2, dropOutAngle: DROP_OUT_ANGLE };

function finite(value: unknown, path: string): void {
  if (typeof value === 'number') expect(Number.isFinite(value), `${path} is ${value}`).toBe(true);
  else if (typeof value === 'object' && value !== null) for (const [key, inner] of Object.entries(value)) finite(inner, `${path}.${key}`);
}

/** rows of a short sweep, held to their ranges */
function soundRows(pairing: Pairing, dial: number): readonly DialRow[] {
  expect(checkPairing(pairing)).toEqual([]);
  const positions = [...new Set([dial, 100])].sort((a, b) => a - b);
  const { rows, counters } = sweepDial(pairing, positions, PLAN);
  expect(rows).toHaveLength(positions.length === 1 ? 1 : 2 * positions.length);
  finite(rows, 'rows');
  finite(counters, 'counters');
  // an undecided half-cycle stops at its budget, and none goes beyond it
  expect(counters.steps).toBeLessThanOrEqual((counters.halfCycles + rows.length) * 2 * STEP_BUDGET);
  for (const row of rows) {
    expect(row.silentShare).toBeLessThanOrEqual(1);
    for (const share of [row.silentShare, row.polarityDifference, row.variation]) expect(share).toBeGreaterThanOrEqual(0);
    for (const angle of [row.firingAngle, row.conductionAngle]) {
      if (angle === null) continue;
      expect(angle).toBeGreaterThanOrEqual(0);
      expect(angle).toBeLessThanOrEqual(180 + 1e-9);
    }
    expect(row.peakCurrent).toBeGreaterThanOrEqual(row.rmsCurrent * (1 - 1e-3));
    expect(row.rmsCurrent).toBeGreaterThanOrEqual(Math.abs(row.dcCurrent) * (1 - 1e-9));
  }
  return rows;
}

describe('a generated circuit', () => {
  test('of lamps as they are built is decided at every dial position, in finite numbers', { timeout: PATIENCE }, () => {
    let [undecided, seen] = [0, 0];
    fc.assert(
      fc.property(builtPairings, dialPositions, (pairing, dial) => {
        const rows = soundRows(pairing, dial);
        seen += rows.length;
        undecided += rows.filter((r) => r.state === 'undecided').length;
      }),
      runsOf(200),
    );
    console.info(`undecided dial rows of lamps as they are built: ${undecided} of ${seen}`);
    expect(undecided / seen).toBeLessThan(0.02);
  });

  test('of anything the checks let pass ends, decided or not, in finite numbers', { timeout: PATIENCE }, () => {
    let [undecided, seen] = [0, 0];
    fc.assert(
      fc.property(validPairings, dialPositions, (pairing, dial) => {
        const rows = soundRows(pairing, dial);
        seen += rows.length;
        undecided += rows.filter((r) => r.state === 'undecided').length;
      }),
      runsOf(40),
    );
    console.info(`undecided dial rows of anything valid: ${undecided} of ${seen}`);
    expect(undecided / seen).toBeLessThan(0.2);
  });
});
