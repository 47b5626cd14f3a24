/**
 * Puts what the catalogue says in the place of the ids that a pairing names, before anything is completed or fingerprinted: a pairing
 * by reference and the same one in full are one question. Remembers which revisions those were.
 */
import type { EntryStore } from '../../db/entries.ts';
import type { JudgedCircuit, JudgedEntry, JudgedGroup } from '../../db/judged-pairs.ts';
import type { DimmerEntry, LampEntry } from '../schemas/entry.ts';
import type { AskedPairing, ReferringPairing } from '../schemas/pairing.ts';
import type { Issue } from '../schemas/wire-parsing.ts';

export type ReferenceFailure = { readonly kind: 'entries-not-known'; readonly issues: readonly Issue[] };

/** Which revisions a pairing named; undefined for what was given in full. */
export type References = Pick<JudgedCircuit, 'dimmer' | 'groups'>;

export type Resolution =
  | { readonly ok: true; readonly pairing: AskedPairing; readonly references: References }
  | { readonly ok: false; readonly failure: ReferenceFailure };

export function resolveReferences(asked: ReferringPairing, entries: EntryStore): Resolution {
  const issues: Issue[] = [];
  const find = <E>(kind: 'dimmer' | 'lamp', id: string, path: string): { entry: E; judged: JudgedEntry } | undefined => {
    const row = entries.find(kind, id);
    if (row === undefined) {
      issues.push({ path, message: `must be the id of a ${kind} in the catalogue: there is none under ${JSON.stringify(id)}` });
      return undefined;
    }
    return { entry: JSON.parse(row.content) as E, judged: { id, revision: row.revision } };
  };

  const dimmer =
    'dimmerId' in asked.dimmer
      ? find<DimmerEntry>('dimmer', asked.dimmer.dimmerId, 'dimmer.dimmerId')
      : { entry: { dimmer: asked.dimmer }, judged: undefined };
  const lamps = asked.lamps.map((group, index) =>
    'lampId' in group
      ? { count: group.count, found: find<LampEntry>('lamp', group.lampId, `lamps[${index}].lampId`) }
      : { count: group.count, found: { entry: { lamp: group.lamp }, judged: undefined } },
  );
  if (dimmer === undefined || issues.length > 0) return { ok: false, failure: { kind: 'entries-not-known', issues } };

  const known = lamps.flatMap(({ count, found }) => (found === undefined ? [] : [{ count, ...found }]));
  const groups: readonly JudgedGroup[] = known.map(({ count, judged }) => ({ count, lamp: judged }));
  return {
    ok: true,
    pairing: { ...asked, dimmer: dimmer.entry.dimmer, lamps: known.map(({ count, entry }) => ({ count, lamp: entry.lamp })) },
    references: { dimmer: dimmer.judged, groups },
  };
}
