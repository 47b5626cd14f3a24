/** Raises the low end of the dial until what is left of it is steady: simulated anew from dark at that setting. */
import { LEAST_STEADY_RANGE } from '../../tolerances.ts';
import type { Remedy } from '../../verdict.ts';
import { outcomeOf, type Patient } from './candidate.ts';
import type { Search } from './search.ts';

export function lowEndTrim(patient: Patient): Search {
  const { dialPositions } = patient.options;
  const { lowestDial } = patient.base;
  const top = dialPositions[dialPositions.length - 1];
  const settings = dialPositions.filter(
    (p) => lowestDial !== null && top !== undefined && p >= lowestDial && top - p >= LEAST_STEADY_RANGE,
  );
  let candidates = 0;
  for (const position of settings) {
    candidates++;
    const left = dialPositions.filter((p) => p >= position);
    const trial = patient.try(patient.pairing, left);
    if (trial?.grade !== 'suitable') continue;
    const remedy: Remedy = {
      kind: 'low-end-trim',
      position,
      power: 0,
      parts: 0,
      ...outcomeOf(
        patient,
        trial,
        `Set the dimmer's low-end trim so that the dial does not go below ${position} %: what is left of it is steady at every corner.`,
      ),
    };
    return { kind: 'low-end-trim', candidates, remedy };
  }
  return { kind: 'low-end-trim', candidates, remedy: null };
}
