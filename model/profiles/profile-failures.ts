/** The closed union of what can be wrong with a profile: a lamp class, a phase table or a scope record. Returned, never thrown. */
import type { LampClass } from './lamp-class.ts';

/** Each carries `detail`, one plain sentence that names the figures and what would be right. */
export type ProfileFailure =
  /** numbers that cannot be worked with; `path` is the place in what was given (dotted, zero-based) */
  | {
      readonly kind: 'invalid-profile';
      readonly detail: string;
      readonly issues: readonly { readonly path: string; readonly message: string }[];
    }
  /** no circuit of the class has the stated power factor; `range` is what the class's circuits have */
  | {
      readonly kind: 'class-does-not-fit';
      readonly detail: string;
      readonly lampClass: LampClass;
      readonly range: readonly [number, number];
    }
  /** shares of the recorded r.m.s. current */
  | { readonly kind: 'residual-too-large'; readonly detail: string; readonly residual: number; readonly limit: number }
  /** too few points carry current to tell how it rises and falls */
  | { readonly kind: 'arc-not-resolved'; readonly detail: string; readonly points: number }
  /** the power that a phase table comes to is not that of the lamp; W */
  | { readonly kind: 'table-power'; readonly detail: string; readonly power: number }
  | ScopeFailure;

export type ScopeFailure =
  /** `row` counts from 1 and includes header rows; null where the fault is not in one row or column */
  | { readonly kind: 'unreadable-record'; readonly detail: string; readonly row: number | null; readonly column: string | null }
  | { readonly kind: 'time-not-rising' | 'time-not-even'; readonly detail: string; readonly row: number }
  | {
      readonly kind: 'no-full-period' | 'too-few-samples' | 'columns-swapped' | 'voltage-not-a-sine' | 'no-current';
      readonly detail: string;
    }
  | { readonly kind: 'frequency-out-of-range' | 'voltage-out-of-range'; readonly detail: string; readonly value: number }
  | { readonly kind: 'clipped'; readonly detail: string; readonly column: 'voltage' | 'current' }
  | { readonly kind: 'wrong-units'; readonly detail: string; readonly factor: number | null }
  | { readonly kind: 'power-disagrees'; readonly detail: string; readonly factor: number }
  | { readonly kind: 'too-noisy'; readonly detail: string; readonly noise: number };

export type ProfileOutcome<T> = { readonly ok: true; readonly value: T } | { readonly ok: false; readonly failure: ProfileFailure };

export function refused(failure: ProfileFailure): { readonly ok: false; readonly failure: ProfileFailure } {
  return { ok: false, failure };
}
