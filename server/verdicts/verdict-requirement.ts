/**
 * What dimmer the lamps of a stored verdict would want: simulated from the stored pairing when it is first asked for, then kept. Asked
 * again while it is being computed, it waits for the one computation.
 */
import type { RequirementRow, RequirementStore } from '../../db/requirements.ts';
import type { VerdictRow, VerdictStore } from '../../db/verdicts.ts';
import { MODEL_VERSION, type Requirement } from '../../model/index.ts';
import type { RequirementAnswer } from '../schemas/requirement.ts';
import { shownPairing } from '../simulation/asked-circuit.ts';
import type { Simulation, SimulationFailure } from '../simulation/simulation.ts';
import { toModel } from './pairing-to-model.ts';
import { requirementAnswer } from './remedies-to-wire.ts';
import { storedJudgement, storedQuestion } from './stored-verdicts.ts';

export interface RequirementDependencies {
  readonly simulation: Simulation;
  readonly verdicts: VerdictStore;
  readonly requirements: RequirementStore;
  readonly now: () => Date;
}

export type RequirementResult =
  | { readonly ok: true; readonly requirement: RequirementAnswer }
  | { readonly ok: false; readonly failure: SimulationFailure | { readonly kind: 'verdict-not-found' } };

type Bound = { readonly ok: true; readonly row: RequirementRow } | { readonly ok: false; readonly failure: SimulationFailure };

export function verdictRequirements({ simulation, verdicts, requirements, now }: RequirementDependencies) {
  const underWay = new Map<string, Promise<Bound>>();

  const boundAndStore = async (verdict: VerdictRow): Promise<Bound> => {
    const { pairing, options } = toModel(storedQuestion(verdict));
    const bound = await simulation.boundRequirement(shownPairing(pairing, storedJudgement(verdict).foundLamps), options);
    if (!bound.ok) return bound;
    const row = {
      verdict_id: verdict.id,
      model_version: MODEL_VERSION,
      created_at: now().toISOString(),
      content: JSON.stringify(bound.value),
    };
    return { ok: true, row: requirements.insertOnce(row) };
  };

  return async (id: string): Promise<RequirementResult> => {
    const verdict = verdicts.findById(id);
    if (verdict === undefined) return { ok: false, failure: { kind: 'verdict-not-found' } };
    const known = requirements.find(id, MODEL_VERSION);
    if (known !== undefined) return { ok: true, requirement: answerOf(verdict, known) };

    const running = underWay.get(id);
    if (running !== undefined) {
      const shared = await running;
      return shared.ok ? { ok: true, requirement: answerOf(verdict, shared.row) } : shared;
    }
    const bounding = boundAndStore(verdict).finally(() => underWay.delete(id));
    underWay.set(id, bounding);
    const bound = await bounding;
    return bound.ok ? { ok: true, requirement: answerOf(verdict, bound.row) } : bound;
  };
}

function answerOf(verdict: VerdictRow, row: RequirementRow): RequirementAnswer {
  const standing = { id: row.verdict_id, modelVersion: row.model_version, createdAt: row.created_at };
  return requirementAnswer(standing, storedJudgement(verdict), JSON.parse(row.content) as Requirement);
}
