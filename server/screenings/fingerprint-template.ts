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

/** A lamp or a dimmer completed, as canonical JSON, and what was assumed of it, as the inside of a JSON list. */
export interface CompletedPart {
  readonly json: string;
  readonly assumed: string;
}

export interface FingerprintTemplate {
  completeLamp(lamp: AskedLamp): CompletedPart;
  completeDimmer(dimmer: AskedDimmer): CompletedPart;
  fingerprint(lamp: CompletedPart, dimmer: CompletedPart, count: number): string;
  /** whether each pairing speaks for its dimmer and its lamp as they stand */
  readonly plain: boolean;
}

// What a part is completed beside; a part's defaults depend on the frame and on nothing else of the pairing.
const ANY_DIMMER: AskedDimmer = { latchingCurrent_mA: 50, holdingCurrent_mA: 30 };
const ANY_LAMP: AskedLamp = { load: { kind: 'resistive', resistance_Ohm: 1000 } };

const DIMMER = 'dimmer.';
const LAMP = 'lamps[0].';
const DIMMER_HERE = '(dimmer)';
const LAMPS_HERE = '(lamps)';

export function fingerprintTemplate(frame: PairingFrame, modelVersion: string): FingerprintTemplate {
  const completeWith = (lamp: AskedLamp, dimmer: AskedDimmer) => completePairing({ ...frame, dimmer, lamps: [{ count: 1, lamp }] });
  const whole = completeWith(ANY_LAMP, ANY_DIMMER);
  const text = canonicalJson({ modelVersion, pairing: { ...whole.pairing, dimmer: DIMMER_HERE, lamps: LAMPS_HERE } });
  const [beforeDimmer = '', rest = ''] = text.slice(1).split(`"${DIMMER_HERE}"`);
  const [beforeLamps = '', end = ''] = rest.split(`"${LAMPS_HERE}"`);
  const ofFrame = assumedOf(whole, (path) => !path.startsWith(DIMMER) && !path.startsWith(LAMP));

  return {
    completeLamp: (lamp) => {
      const completion = completeWith(lamp, ANY_DIMMER);
      return { json: canonicalJson(completion.pairing.lamps[0]?.lamp), assumed: assumedOf(completion, (path) => path.startsWith(LAMP)) };
    },
    completeDimmer: (dimmer) => {
      const completion = completeWith(ANY_LAMP, dimmer);
      return { json: canonicalJson(completion.pairing.dimmer), assumed: assumedOf(completion, (path) => path.startsWith(DIMMER)) };
    },
    fingerprint: (lamp, dimmer, count) => {
      // in the order of sorted paths: dimmer, lamps, then mains and options
      const assumed = [dimmer.assumed, lamp.assumed, ofFrame].filter((paths) => paths !== '').join(',');
      const pairing = `${beforeDimmer}${dimmer.json}${beforeLamps}[{"count":${count},"lamp":${lamp.json}}]${end}`;
      return createHash('sha256').update(`{"assumed":[${assumed}],${pairing}`).digest('hex');
    },
    plain: isPlainPair(whole.pairing),
  };
}

function assumedOf({ assumptions }: Completion, isOfPart: (path: string) => boolean): string {
  const paths = assumptions.map(({ path }) => path).filter(isOfPart);
  return JSON.stringify(paths.sort()).slice(1, -1);
}
