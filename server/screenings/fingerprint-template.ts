/**
 * Fingerprints of many pairings that share everything but lamp, dimmer and count. The canonical JSON of a pairing is put together from
 * canonical parts, so that a pairing costs one hash instead of completing it whole. A test holds it to `fingerprintOf`.
 */
import { createHash } from 'node:crypto';
import { isPlainPair } from '../catalogue/plain-pairs.ts';
import type { PairingFrame } from '../queue/judging-queue.ts';
import type { AskedDimmer, AskedLamp } from '../schemas/pairing.ts';
import { canonicalJson } from '../verdicts/canonical-inputs.ts';
import { type Completion, completePairing } from '../verdicts/pairing-completion.ts';

/** A lamp or a dimmer completed, as canonical JSON; or why it cannot be. */
export type CompletedPart =
  | { readonly ok: true; readonly json: string }
  | { readonly ok: false; readonly failure: Extract<Completion, { ok: false }>['failure'] };

export interface FingerprintTemplate {
  completeLamp(lamp: AskedLamp): CompletedPart;
  completeDimmer(dimmer: AskedDimmer): CompletedPart;
  fingerprint(lampJson: string, dimmerJson: string, count: number): string;
  /** whether each pairing speaks for its dimmer and its lamp as they stand */
  readonly plain: boolean;
}

// What a part is completed beside; a part's defaults depend on the frame and on nothing else of the pairing.
const ANY_DIMMER: AskedDimmer = { latchingCurrent_mA: 50, holdingCurrent_mA: 30 };
const ANY_LAMP: AskedLamp = { load: { kind: 'resistive', resistance_Ohm: 1000 } };

const DIMMER_HERE = '(dimmer)';
const LAMPS_HERE = '(lamps)';

export function fingerprintTemplate(frame: PairingFrame, modelVersion: string): FingerprintTemplate {
  const completeWith = (lamp: AskedLamp, dimmer: AskedDimmer) => completePairing({ ...frame, dimmer, lamps: [{ count: 1, lamp }] });
  const whole = completeWith(ANY_LAMP, ANY_DIMMER);
  if (!whole.ok) throw new Error('A plain resistor is always completed.');
  const text = canonicalJson({ modelVersion, pairing: { ...whole.pairing, dimmer: DIMMER_HERE, lamps: LAMPS_HERE } });
  const [beforeDimmer = '', rest = ''] = text.split(`"${DIMMER_HERE}"`);
  const [beforeLamps = '', end = ''] = rest.split(`"${LAMPS_HERE}"`);

  return {
    completeLamp: (lamp) => {
      const completion = completeWith(lamp, ANY_DIMMER);
      return completion.ok ? { ok: true, json: canonicalJson(completion.pairing.lamps[0]?.lamp) } : completion;
    },
    completeDimmer: (dimmer) => {
      const completion = completeWith(ANY_LAMP, dimmer);
      return completion.ok ? { ok: true, json: canonicalJson(completion.pairing.dimmer) } : completion;
    },
    fingerprint: (lampJson, dimmerJson, count) =>
      createHash('sha256').update(`${beforeDimmer}${dimmerJson}${beforeLamps}[{"count":${count},"lamp":${lampJson}}]${end}`).digest('hex'),
    plain: isPlainPair(whole.pairing),
  };
}
