/**
 * How many pairings of a screening are stored already, told before it begins: counted where there are few, reckoned from evenly spread
 * ones where looking at all would take minutes.
 */
import { MODEL_VERSION } from '../../model/index.ts';
import { pacing } from '../imports/pacing.ts';
import type { AcceptedAnswer, ScreeningRequest } from '../schemas/screening.ts';
import { fingerprintTemplate } from './fingerprint-template.ts';
import { type PositionedScreening, pairingPositions } from './pairing-positions.ts';
import type { ScreeningStores } from './screening-dependencies.ts';
import { countsOf, frameOf } from './screening-frame.ts';
import { selectedParts } from './selected-parts.ts';

/** pairings looked at: half a second at most, with breaks */
const MOST_LOOKED_AT = 1_000;

export async function countStored(
  { screeningSelection, screeningVerdicts }: ScreeningStores,
  row: PositionedScreening,
  request: ScreeningRequest,
): Promise<AcceptedAnswer['foundStored']> {
  const template = fingerprintTemplate(frameOf(request), MODEL_VERSION);
  const parts = selectedParts(screeningSelection, row.seq, template);
  const positions = pairingPositions(row, countsOf(request), screeningSelection);
  const lookedAt = Math.min(row.total, MOST_LOOKED_AT);
  const breathe = pacing();
  let found = 0;
  for (let index = 0; index < lookedAt; index += 1) {
    await breathe();
    const pairing = positions.at(Math.floor((index * row.total) / lookedAt));
    const lamp = parts.lamp(pairing.lamp).completed;
    const dimmer = parts.dimmer(pairing.dimmer).completed;
    if (screeningVerdicts.seqOf(template.fingerprint(lamp, dimmer, pairing.count)) !== undefined) found += 1;
  }
  if (lookedAt === row.total) return { pairings: found, basis: 'counted', lookedAt };
  return { pairings: Math.round((found * row.total) / lookedAt), basis: 'sampled', lookedAt };
}
