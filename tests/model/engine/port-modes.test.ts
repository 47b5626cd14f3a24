/** Modal bases carried over from one timing resistance to another, held against decompositions. */
import fc from 'fast-check';
import { expect, test } from 'vitest';
import type { OpenModeSystem } from '../../../model/circuit/mode-system.ts';
import { closeModeSystem, portGain } from '../../../model/circuit/mode-system.ts';
import type { MappedSystem } from '../../../model/engine/configuration-map.ts';
import { type ModalBasis, modalBasis } from '../../../model/engine/eigen.ts';
import { modesAtGain, type PortModes, portModes } from '../../../model/engine/port-modes.ts';
import type { Pairing } from '../../../model/pairing.ts';
import { builtPairings, PATIENCE, runsOf } from '../../support/model-arbitrary.ts';
import { startRun } from '../../support/model-run.ts';

const RESISTANCES = [1e3, 3e3, 10e3, 22e3, 60e3, 150e3, 400e3];

/** the systems that a circuit passes through in its first half-cycles */
function systemsOf(pairing: Pairing): Set<MappedSystem> {
  const met = new Set<MappedSystem>();
  const run = startRun(pairing, 60);
  run.segmentListener = { segment: (mode) => void met.add(mode.mapped.system) };
  for (let k = 0; k < 4; k++) if (run.finishHalfCycle().outcome !== 'done') break;
  return met;
}

function matrixOf(open: OpenModeSystem, resistance: number): Float64Array {
  const { states: n, rows, columns } = closeModeSystem(open, resistance);
  return Float64Array.from({ length: n * n }, (_, at) => rows[Math.floor(at / n) * columns + (at % n)] as number);
}

/** basis * eigenvalues * inverse */
function matrixFrom({ reals, pairs, decay, rotation, basis, inverse }: ModalBasis, n: number): number[] {
  const sum = new Array(n * n).fill(0);
  const add = (column: number, row: number, factor: number): void => {
    for (let r = 0; r < n; r++) {
      for (let c = 0; c < n; c++) sum[r * n + c] += factor * (basis[r * n + column] as number) * (inverse[row * n + c] as number);
    }
  };
  for (let t = 0; t < reals + pairs; t++) {
    const k = t < reals ? t : 2 * t - reals;
    add(k, k, decay[t] as number);
    if (t < reals) continue;
    add(k + 1, k + 1, decay[t] as number);
    add(k, k + 1, -(rotation[t] as number));
    add(k + 1, k, rotation[t] as number);
  }
  return sum;
}

/** largest entry of inverse * basis - 1: by that much a state jumps where it passes into the mode */
function jumpOf({ basis, inverse }: ModalBasis, n: number): number {
  let most = 0;
  for (let r = 0; r < n; r++) {
    for (let c = 0; c < n; c++) {
      let sum = r === c ? -1 : 0;
      for (let k = 0; k < n; k++) sum += (inverse[r * n + k] as number) * (basis[k * n + c] as number);
      most = Math.max(most, Math.abs(sum));
    }
  }
  return most;
}

test('modes carried over to another timing resistance make up the same matrix as decomposed ones, and nearly all can be carried over', {
  timeout: PATIENCE,
}, () => {
  const counts = { carried: 0, not: 0, worst: 0, jump: 0 };
  fc.assert(
    fc.property(
      builtPairings.filter(({ dimmer }) => dimmer.drive.kind === 'diac'),
      (pairing) => {
        for (const { open } of systemsOf(pairing)) {
          const n = open.states;
          let port: PortModes | null = null;
          for (const resistance of RESISTANCES) {
            const matrix = matrixOf(open, resistance);
            const gain = portGain(open, resistance);
            const carried = port === null ? null : modesAtGain(port, gain, matrix, n);
            if (carried === null) {
              if (port !== null) counts.not++;
              port = portModes(modalBasis(matrix, n), gain, open);
              continue;
            }
            counts.carried++;
            const size = Math.max(...matrix.map(Math.abs));
            const made = matrixFrom(carried, n);
            const decomposed = matrixFrom(modalBasis(matrix, n), n);
            const error = (of: number[]): number => Math.max(...of.map((x, at) => Math.abs(x - (matrix[at] as number)))) / size;
            counts.worst = Math.max(counts.worst, error(made));
            counts.jump = Math.max(counts.jump, jumpOf(carried, n));
            expect(jumpOf(carried, n)).toBeLessThan(5e-13);
            expect(error(made)).toBeLessThan(1e-9 + 10 * error(decomposed));
          }
        }
      },
    ),
    runsOf(40),
  );
  console.info('modes at another timing resistance', counts);
  expect(counts.carried).toBeGreaterThan(10 * counts.not);
});

test('modes are not carried over to where two decays have become a ring', () => {
  // x'' = -(r / l) x' - x / (l c): a parallel resistance as the port of a series circuit, overdamped and underdamped
  const open: OpenModeSystem = {
    states: 2,
    outputs: 0,
    constants: 0,
    columns: 4,
    // states x1, x2, the mains, the port: the port takes its current from x1
    rows: Float64Array.from([0, 1, 0, 1, -1, 0, 0, 0, 1, 0, 0, 0]),
    hasPort: true,
  };
  const overdamped = matrixOf(open, -0.2);
  const underdamped = matrixOf(open, -5);
  expect(modalBasis(overdamped, 2).reals).toBe(2);
  expect(modalBasis(underdamped, 2).pairs).toBe(1);
  const port = portModes(modalBasis(overdamped, 2), portGain(open, -0.2), open);
  expect(modesAtGain(port, portGain(open, -5), underdamped, 2)).toBeNull();
  expect(modesAtGain(port, portGain(open, -0.18), matrixOf(open, -0.18), 2)).toMatchObject({ reals: 2, pairs: 0 });
});
