/** What every benchmark prints alike: the machine it ran on, and medians with their spread. */
import { cpus } from 'node:os';

export function machineLine(): string {
  const [first] = cpus();
  return `${first?.model.trim() ?? 'unknown processor'}, ${cpus().length} cores, Node ${process.version}`;
}

export interface Spread {
  readonly median: number;
  readonly least: number;
  readonly most: number;
}

export function spreadOf(values: readonly number[]): Spread {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  const upper = sorted[middle] ?? Number.NaN;
  const median = sorted.length % 2 === 1 ? upper : ((sorted[middle - 1] ?? Number.NaN) + upper) / 2;
  return { median, least: sorted[0] ?? Number.NaN, most: sorted[sorted.length - 1] ?? Number.NaN };
}

/** three significant digits, thousands apart */
export function figure(value: number): string {
  const rounded = Number(value.toPrecision(3));
  return rounded >= 1000 ? rounded.toLocaleString('en-US') : String(rounded);
}
