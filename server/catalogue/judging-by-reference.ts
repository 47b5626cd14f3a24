/** Judges a pairing that may name entries of the catalogue, and ties the verdict to the revisions it judged. */
import type { EntryStore } from '../../db/entries.ts';
import type { JudgedPairs } from '../../db/judged-pairs.ts';
import type { ReferringPairing } from '../schemas/pairing.ts';
import type { JudgeVerdict, JudgingResult } from '../verdicts/verdict-judging.ts';
import { type ReferenceFailure, resolveReferences } from './pairing-references.ts';
import { isPlainPair } from './plain-pairs.ts';

export type ReferringResult = JudgingResult | { readonly ok: false; readonly failure: ReferenceFailure };

export function judgingByReference(
  { entries, judgedPairs }: { readonly entries: EntryStore; readonly judgedPairs: JudgedPairs },
  judge: JudgeVerdict,
): (asked: ReferringPairing) => Promise<ReferringResult> {
  return async (asked) => {
    const resolution = resolveReferences(asked, entries);
    if (!resolution.ok) return resolution;
    const judged = await judge(resolution.pairing);
    if (!judged.ok) return judged;
    const { references } = resolution;
    const refers = references.dimmer !== undefined || references.groups.some(({ lamp }) => lamp !== undefined);
    if (refers) judgedPairs.tie(judged.verdict.id, { ...references, plain: isPlainPair(judged.verdict.pairing) });
    return judged;
  };
}
