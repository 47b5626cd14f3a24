/** Reads a stored verdict back: whole, or the fields that were asked for. */
import type { VerdictRow } from '../../db/verdicts.ts';
import type { Judgement } from '../../model/index.ts';
import type { JudgedPairing } from '../schemas/pairing.ts';
import type { Verdict } from '../schemas/verdict.ts';
import { verdictToWire } from './judgement-to-wire.ts';
import type { Assumption } from './pairing-completion.ts';

export function storedPairing(row: VerdictRow): JudgedPairing {
  return JSON.parse(row.pairing) as JudgedPairing;
}

export function storedVerdict(row: VerdictRow): Verdict {
  return verdictToWire({
    id: row.id,
    modelVersion: row.model_version,
    createdAt: row.created_at,
    pairing: storedPairing(row),
    assumptions: JSON.parse(row.assumptions) as Assumption[],
    judgement: JSON.parse(row.judgement) as Judgement,
  });
}

/** In the order in which they were asked for. */
export function chosenFields<T extends object, F extends keyof T>(value: T, fields: readonly F[]): Pick<T, F> {
  return Object.fromEntries(fields.map((field) => [field, value[field]])) as Pick<T, F>;
}
