/** Judges one pairing: checks it, sweeps the dial, grades what the sweep showed. */
import type { Outcome } from '../failures.ts';
import { OBSERVATION_PLAN } from '../observation/dial-observation.ts';
import { sweepDial } from '../observation/dial-sweep.ts';
import type { Pairing } from '../pairing.ts';
import { checkOptions, checkPairing } from '../pairing-check.ts';
import type { Judgement, JudgeOptions } from '../verdict.ts';
import { gradeDial } from './grade.ts';
import { summarize } from './summary.ts';

export function judgePairing(pairing: Pairing, options: JudgeOptions): Outcome<Judgement> {
  const issues = [...checkPairing(pairing), ...checkOptions(options)];
  if (issues.length > 0) return { ok: false, failure: { kind: 'invalid-pairing', issues } };
  const { rows, counters } = sweepDial(pairing, options.dialPositions, { ...OBSERVATION_PLAN, dropOutAngle: options.dropOutAngle });
  const judged = gradeDial(pairing, rows);
  return {
    ok: true,
    value: {
      grade: judged.grade,
      summary: summarize(pairing, rows, judged),
      conditions: judged.conditions,
      reasons: judged.reasons,
      dial: rows,
      popOn: judged.popOn,
      corners: [{ name: 'nominal', grade: judged.grade }],
      counters,
    },
  };
}
