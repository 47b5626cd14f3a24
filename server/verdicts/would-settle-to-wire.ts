/** Converts what would settle a grade from SI to the unit of the assumed value's own field. */
import type { ValueWouldSettle, WouldSettle } from '../../model/index.ts';
import type { ValueWouldSettleAnswer, WouldSettleAnswer } from '../schemas/would-settle.ts';
import { assumedOnWire } from './assumed-values.ts';
import { shown } from './shown-figures.ts';

/** `assumed`: wire paths of the values that were filled in */
export function wouldSettleToWire(found: WouldSettle, assumed: readonly string[]): WouldSettleAnswer {
  return found.kind === 'circuit' ? { kind: found.kind, ask: found.ask, detail: found.detail } : valueToWire(found, assumed);
}

export function valueToWire(found: ValueWouldSettle, assumed: readonly string[]): ValueWouldSettleAnswer {
  const { what, threshold, gradeBelow, gradeAbove, corner, measure, detail, alsoOpen } = found;
  const { path, unit } = assumedOnWire(found.path, assumed) ?? { path: found.path, unit: 1 };
  return {
    kind: found.kind,
    path,
    what,
    assumed: shown(found.assumed / unit),
    threshold: { low: shown(threshold.low / unit), high: shown(threshold.high / unit) },
    gradeBelow,
    gradeAbove,
    corner,
    measure,
    detail,
    alsoOpen: alsoOpen.map((open) => assumedOnWire(open, assumed)?.path ?? open),
  };
}
