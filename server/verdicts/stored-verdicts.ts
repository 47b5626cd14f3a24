/** Reads a stored verdict back: whole, or the fields that were asked for. */
import type { VerdictRow } from '../../db/verdicts.ts';
import type { JudgedPairing } from '../schemas/pairing.ts';
import type { Verdict } from '../schemas/verdict.ts';
import type { AskedJudgement } from '../simulation/asked-circuit.ts';
import { verdictToWire } from './judgement-to-wire.ts';
import type { Assumption, Completion } from './pairing-completion.ts';

export function storedQuestion(row: VerdictRow): Completion {
  return { pairing: JSON.parse(row.pairing) as JudgedPairing, assumptions: JSON.parse(row.assumptions) as Assumption[] };
}

export function storedJudgement(row: VerdictRow): AskedJudgement {
  return JSON.parse(row.judgement) as AskedJudgement;
}

export function storedVerdict(row: VerdictRow): Verdict {
  return verdictToWire({
    id: row.id,
    modelVersion: row.model_version,
    createdAt: row.created_at,
    ...storedQuestion(row),
    judgement: storedJudgement(row),
  });
}

/** In the order in which they were asked for. */
export function chosenFields<T extends object, F extends keyof T>(value: T, fields: readonly F[]): Pick<T, F> {
  return Object.fromEntries(fields.map((field) => [field, value[field]])) as Pick<T, F>;
}
