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
    [
      'a lamp known by its class',
      { ...briefPairing(), lamps: [{ count: 2, lamp: { ratedPower_W: 7, load: { kind: 'class', class: 'filament' } } }] },
    ],
  ])('is that of the whole pairing, for %s', (_, sent) => {
    const { dimmer, lamps, ...frame } = askedPairing.parse(sent);
    const template = fingerprintTemplate(frame, MODEL_VERSION);
    for (const { lamp, count } of lamps) {
      const completion = completePairing({ ...frame, dimmer, lamps: [{ count, lamp }] });
      const parts = [template.completeLamp(lamp), template.completeDimmer(dimmer)] as const;
      expect(template.fingerprint(...parts, count)).toBe(fingerprintOf(completion, MODEL_VERSION));
    }
  });
});
