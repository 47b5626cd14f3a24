/**
 * The judgement as it is kept: the figures of the dial rows to seven significant digits, which is what answers show and finer than the
 * model is right. The last bits of a float are what compresses worst and what nobody reads; the stored pairing gives them again.
 */
import type { DialRow } from '../../model/index.ts';
import type { AskedJudgement } from '../simulation/asked-circuit.ts';

/** SI units; far below half of the least that any field of an answer shows, so it would read as 0 there */
const NOISE = 1e-10;

export function recordedJudgement(judgement: AskedJudgement): AskedJudgement {
  return { ...judgement, dial: judgement.dial.map((row) => rounded(row) as DialRow) };
}

function rounded(value: unknown): unknown {
  if (typeof value === 'number') return Math.abs(value) < NOISE ? 0 : Number(value.toPrecision(7));
  if (Array.isArray(value)) return value.map(rounded);
  if (typeof value !== 'object' || value === null) return value;
  return Object.fromEntries(Object.entries(value).map(([key, inner]) => [key, rounded(inner)]));
}
