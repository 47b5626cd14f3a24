import { describe, expect, it } from 'vitest';
import { MODEL_VERSION } from '../../model/index.ts';
import { askedPairing } from '../../server/schemas/pairing.ts';
import { fingerprintTemplate } from '../../server/screenings/fingerprint-template.ts';
import { fingerprintOf } from '../../server/verdicts/canonical-inputs.ts';
import { completePairing } from '../../server/verdicts/pairing-completion.ts';
import { briefPairing, examplePairing, fullPairing } from '../support/server-pairings.ts';

describe('a fingerprint put together from parts', () => {
  it.each([
    ['a brief pairing', briefPairing()],
    ['the example', examplePairing()],
    ['the example at 120 V', { ...examplePairing(), mains: { voltage_V: 120, frequency_Hz: 60 } }],
    ['a full pairing with a diac', fullPairing('diac')],
    ['a full pairing with timed firing', fullPairing('timed')],
  ])('is that of the whole pairing, for %s', (_, sent) => {
    const { dimmer, lamps, ...frame } = askedPairing.parse(sent);
    const template = fingerprintTemplate(frame, MODEL_VERSION);
    for (const { lamp, count } of lamps) {
      const completion = completePairing({ ...frame, dimmer, lamps: [{ count, lamp }] });
      const lampPart = template.completeLamp(lamp);
      const dimmerPart = template.completeDimmer(dimmer);
      if (!completion.ok || !lampPart.ok || !dimmerPart.ok) throw new Error('All were to be completed.');
      expect(template.fingerprint(lampPart.json, dimmerPart.json, count)).toBe(fingerprintOf(completion.pairing, MODEL_VERSION));
    }
  });
});
