/** Judges a pairing in this process: the service's own use cases without its server, its threads and its record. Nothing is stored. */
import { MODEL_VERSION } from '../model/index.ts';
import type { AskedPairing } from '../server/schemas/pairing.ts';
import type { RequirementAnswer } from '../server/schemas/requirement.ts';
import type { Verdict } from '../server/schemas/verdict.ts';
import { shownPairing } from '../server/simulation/asked-circuit.ts';
import { directSimulation } from '../server/simulation/direct-simulation.ts';
import type { SimulationFailure } from '../server/simulation/simulation.ts';
import { fingerprintOf, verdictIdOf } from '../server/verdicts/canonical-inputs.ts';
import { verdictToWire } from '../server/verdicts/judgement-to-wire.ts';
import { completePairing } from '../server/verdicts/pairing-completion.ts';
import { toModel } from '../server/verdicts/pairing-to-model.ts';
import { requirementAnswer } from '../server/verdicts/remedies-to-wire.ts';

export type InProcessJudging =
  | { readonly ok: true; readonly verdict: Verdict; readonly requirement: RequirementAnswer | null }
  /** lines for a terminal, the first one the heading */
  | { readonly ok: false; readonly complaint: readonly string[] };

/** With its requirement where that is asked for. */
export async function judgeInProcess(asked: AskedPairing, now: Date, { withRequirement = false } = {}): Promise<InProcessJudging> {
  const completion = completePairing(asked);
  const { pairing, options } = toModel(completion);
  const simulated = await directSimulation.judge(pairing, options);
  if (!simulated.ok) return { ok: false, complaint: complaintOf(simulated.failure) };
  const standing = { id: verdictIdOf(fingerprintOf(completion, MODEL_VERSION)), modelVersion: MODEL_VERSION, createdAt: now.toISOString() };
  const verdict = verdictToWire({ ...standing, ...completion, judgement: simulated.value });
  if (!withRequirement) return { ok: true, verdict, requirement: null };

  const bound = await directSimulation.boundRequirement(shownPairing(pairing, simulated.value.foundLamps), options);
  if (!bound.ok) return { ok: false, complaint: complaintOf(bound.failure) };
  return { ok: true, verdict, requirement: requirementAnswer(standing, simulated.value, bound.value) };
}

function complaintOf(failure: SimulationFailure): readonly string[] {
  switch (failure.kind) {
    case 'queue-full':
      throw new Error('A simulation in the calling thread has no queue.');
    case 'profile-refused':
      return ['a lamp of this pairing cannot be simulated', `lamps[${failure.group}].lamp: ${failure.failure.detail}`];
    case 'invalid-pairing':
      return [
        'this pairing cannot be simulated, although each field is valid by itself',
        ...failure.issues.map(({ path, message }) => `${path} ${message}`),
      ];
  }
}
