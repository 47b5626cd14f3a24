/** Adds one or two more of the lamps that are there: of one group at a time, the fewest that help. */
import type { DialRow, Remedy } from '../../verdict.ts';
import { MOST_ADDED_LAMPS } from '../judgement-figures.ts';
import { withCount } from '../lamp-count.ts';
import type { OverCorners } from '../over-corners.ts';
import { outcomeOf, type Patient, type Trial } from './candidate.ts';
import type { Search } from './search.ts';

/** W into all lamps where that is most, at the nominal corner; null where that corner was not judged */
function lampPower({ judged }: OverCorners): number | null {
  const rows: readonly DialRow[] | undefined = judged.find((j) => j.corner.name === 'nominal')?.rows;
  return rows === undefined ? null : Math.max(0, ...rows.map((r) => r.lampPower));
}

function furtherPower(patient: Patient, trial: Trial, group: number, added: number): number {
  const rated = patient.pairing.lamps[group]?.lamp.ratedPower ?? null;
  if (rated !== null) return added * rated;
  return Math.max(0, (lampPower(trial.over) ?? 0) - (lampPower(patient.base) ?? 0));
}

export function moreLamps(patient: Patient): Search[] {
  return patient.pairing.lamps.map((lampGroup, group): Search => {
    let best: Remedy | null = null;
    let candidates = 0;
    for (let added = 1; added <= MOST_ADDED_LAMPS && best?.grade !== 'suitable'; added++) {
      candidates++;
      const trial = patient.try(withCount(patient.pairing, group, lampGroup.count + added));
      if (trial === null || (best !== null && trial.grade !== 'suitable')) continue;
      const power = furtherPower(patient, trial, group, added);
      const which = patient.pairing.lamps.length > 1 ? ` of lamp group ${group + 1}` : '';
      best = {
        kind: 'more-lamps',
        group,
        added,
        power,
        parts: added,
        ...outcomeOf(
          patient,
          trial,
          `Add ${added === 1 ? 'one more lamp' : `${added} more lamps`}${which} to the circuit, ${lampGroup.count + added} in all.`,
        ),
      };
    }
    return { kind: 'more-lamps', candidates, remedy: best };
  });
}
