/** A crossing is located by the output that crosses; the whole state is moved there. */
import { expect, test } from 'vitest';
import { WINDOW_SLACK, WINDOW_STRIDE } from '../../../model/engine/kernels.ts';
import { linearMode } from '../../../model/engine/linear-mode.ts';
import { type Mode, watchOutput } from '../../../model/engine/mode.ts';
import { ModeWalk } from '../../../model/engine/mode-walk.ts';
import { GUARD_SLACK, LADDER_LEVELS } from '../../../model/tolerances.ts';

const OMEGA = 100 * Math.PI;
const SHORTEST = Math.PI / OMEGA / 2 ** LADDER_LEVELS;

test('what does not show in the output that crosses is at the crossing what its closed form says', () => {
  // a decay that the output shows, and a ring that it does not: the steps know nothing of the ring
  const [decay, rotation] = [-4e5, 1e11];
  const rows = Float64Array.from([decay, 0, 0, 0, 0, 0, -1, -rotation, 0, 0, 0, rotation, -1, 0, 0, 1, 0, 0, 0, 0]);
  const linear = linearMode({ states: 3, outputs: 1, constants: 1, columns: 5, rows }, OMEGA, SHORTEST);
  const windows = { rows: new Int32Array(1), records: new Float64Array(WINDOW_STRIDE) };
  const mode = { linear, rest: linear.constantAnswers, windows, guardCount: 1, startLevel: 6 } as unknown as Mode;
  const x = new Float64Array(3);
  for (let bound = 0.1; bound < 0.99; bound += 0.013) {
    watchOutput(mode, 0, 0, bound, Number.POSITIVE_INFINITY);
    windows.records[WINDOW_SLACK] = GUARD_SLACK;
    const walk = new ModeWalk(SHORTEST, 3, 1);
    walk.enter(mode, Float64Array.of(1, 1, 0), 1, 0);
    expect(walk.begin(1, 0)).toBe(true);
    expect(walk.walk(1, 1000)).toBe('crossed');
    walk.leave(x);
    const [turned, size] = [rotation * walk.elapsed, Math.exp(-walk.elapsed)];
    expect(Math.abs((x[0] as number) - bound)).toBeLessThan(GUARD_SLACK);
    expect(Math.abs((x[1] as number) - size * Math.cos(turned))).toBeLessThan(1e-8);
    expect(Math.abs((x[2] as number) - size * Math.sin(turned))).toBeLessThan(1e-8);
  }
});
