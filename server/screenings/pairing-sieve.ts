/**
 * Sorts the open pairings of a page: those stored already are recorded at once, those whose question is under way elsewhere in the
 * screening wait for it, and the rest become a chunk to be judged.
 */
import { MODEL_VERSION } from '../../model/index.ts';
import type { Chunk, PairingFrame, Question } from '../queue/judging-queue.ts';
import type { FingerprintTemplate } from './fingerprint-template.ts';
import type { PositionedPairing } from './pairing-positions.ts';
import type { SelectedParts } from './selected-parts.ts';

export interface Sieve {
  sift(pairings: readonly PositionedPairing[], handle: SieveHandling): Sifted;
}

export interface SieveHandling {
  stored(pairing: PositionedPairing, fingerprint: string, verdict: number): void;
}

export interface Sifted {
  /** null where nothing is to be judged now */
  readonly chunk: Chunk | null;
  /** what other parts of the screening are judging: each settles when its outcome is written */
  readonly underWay: readonly Promise<void>[];
  /** Says that the chunk's outcomes are written, or that there are none. */
  readonly release: () => void;
}

export interface SieveParts {
  readonly screening: string;
  readonly frame: PairingFrame;
  readonly template: FingerprintTemplate;
  readonly parts: SelectedParts;
  readonly seqOf: (fingerprint: string) => number | undefined;
}

export function pairingSieve({ screening, frame, template, parts, seqOf }: SieveParts): Sieve {
  const underWay = new Map<string, Promise<void>>();

  const sift = (pairings: readonly PositionedPairing[], { stored }: SieveHandling): Sifted => {
    const lamps = indexed<SelectedParts['lamp']>();
    const dimmers = indexed<SelectedParts['dimmer']>();
    const questions: Question[] = [];
    const waits = new Set<Promise<void>>();
    let settle: () => void = () => undefined;
    const settled = new Promise<void>((resolve) => {
      settle = resolve;
    });

    for (const pairing of pairings) {
      const lamp = parts.lamp(pairing.lamp);
      const dimmer = parts.dimmer(pairing.dimmer);
      const fingerprint = template.fingerprint(lamp.completed, dimmer.completed, pairing.count);
      const known = seqOf(fingerprint);
      const asked = underWay.get(fingerprint);
      if (known !== undefined) {
        stored(pairing, fingerprint, known);
      } else if (asked !== undefined) {
        waits.add(asked);
      } else {
        underWay.set(fingerprint, settled);
        const { position, count } = pairing;
        questions.push({ position, fingerprint, lamp: lamps.indexOf(lamp), dimmer: dimmers.indexOf(dimmer), count });
      }
    }

    return {
      chunk:
        questions.length === 0
          ? null
          : {
              screening,
              modelVersion: MODEL_VERSION,
              frame,
              lamps: lamps.parts.map(({ asked }) => asked),
              dimmers: dimmers.parts.map(({ asked }) => asked),
              questions,
            },
      // Within the page itself, too: a lamp under two ids asks one question.
      underWay: [...waits].filter((wait) => wait !== settled),
      release: () => {
        for (const { fingerprint } of questions) underWay.delete(fingerprint);
        settle();
      },
    };
  };
  return { sift };
}

function indexed<Read extends (place: number) => unknown>() {
  const parts: ReturnType<Read>[] = [];
  const indices = new Map<ReturnType<Read>, number>();
  const indexOf = (part: ReturnType<Read>): number => {
    const known = indices.get(part);
    if (known !== undefined) return known;
    indices.set(part, parts.length);
    return parts.push(part) - 1;
  };
  return { parts, indexOf };
}
