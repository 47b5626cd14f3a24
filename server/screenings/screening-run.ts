/**
 * Runs one screening: walks its pages from the first open one, records what is stored already, has the rest judged by the queue, and
 * writes outcomes in batches. It holds a few pages and never the list. What it knows is in the record, so that the screening of a
 * process that was killed goes on from there.
 */
import type { ScreeningRow } from '../../db/screenings.ts';
import { MODEL_VERSION } from '../../model/index.ts';
import { pacing } from '../imports/pacing.ts';
import type { Answer, Chunk } from '../queue/judging-queue.ts';
import { askedPairingOf } from '../queue/question-judging.ts';
import type { ScreeningRequest } from '../schemas/screening.ts';
import { threadLanes } from '../simulation/thread-lanes.ts';
import { verdictIdOf } from '../verdicts/canonical-inputs.ts';
import { storeFailure, storeJudgement } from './answer-storing.ts';
import { diskTrouble } from './disk-trouble.ts';
import { durableWriting, waitFor } from './durable-writing.ts';
import { fingerprintTemplate } from './fingerprint-template.ts';
import { outcomeRecording } from './outcome-recording.ts';
import { type PositionedPairing, pairingPositions } from './pairing-positions.ts';
import { pairingSieve, type Sifted } from './pairing-sieve.ts';
import { type Pause, runState } from './run-state.ts';
import type { ScreeningDependencies } from './screening-dependencies.ts';
import { countsOf, frameOf } from './screening-frame.ts';
import { rateMeter } from './screening-speed.ts';
import { selectedParts } from './selected-parts.ts';

export interface ScreeningRun {
  readonly id: string;
  /** Settles when the run holds nothing any more: true where every pairing was looked at and the screening is finished. */
  readonly ended: Promise<boolean>;
  pause(): Pause | null;
  /** pairings an hour over the last minutes; null where nothing was looked at */
  perHour(): number | null;
  /** Begins nothing any more; what is under way is still recorded. */
  stop(): void;
  /** Writes what is known, and takes no more. */
  cancel(): void;
}

/** ms after which known outcomes are written even where the batch is small */
const WRITE_AT_LEAST = 1_000;
/** outcomes of a batch: some milliseconds of writing */
const BATCH = 64;
/** ms between tries where the disk is full or the queue away */
const RETRY = 3_000;

export interface RunPace {
  readonly retry_ms?: number;
}

export function startScreeningRun(deps: ScreeningDependencies, row: ScreeningRow, pace: RunPace = {}): ScreeningRun {
  const { screenings, screeningSelection, screeningPages, screeningVerdicts, judgedPairs, queue, signals, now, logger } = deps;
  const { seq, id } = row;
  const request = JSON.parse(row.request) as ScreeningRequest;
  const retry_ms = pace.retry_ms ?? RETRY;
  const tell = (): void => signals.tell(id);

  const frame = frameOf(request);
  const template = fingerprintTemplate(frame, MODEL_VERSION);
  const parts = selectedParts(screeningSelection, seq, template);
  const positions = pairingPositions(row, countsOf(request), screeningSelection);
  const sieve = pairingSieve({ screening: id, frame, template, parts, seqOf: screeningVerdicts.seqOf });
  const progress = (added: Parameters<typeof screenings.progress>[1]): void => screenings.progress(seq, added);
  const recording = outcomeRecording({ seq, pages: screeningPages, together: screenings.together, progress }, row.open_page);
  let takes = true;
  const state = runState({ store: screenings, seq, now, tell, isOver: () => !takes });
  const trouble = {
    begins: (detail: string) => {
      logger.warn({ screening: id, detail }, 'screening paused');
      state.begin({ reason: 'disk-full', detail });
    },
    ends: () => {
      logger.info({ screening: id }, 'screening goes on');
      state.end('disk-full');
    },
  };
  const durably = durableWriting(trouble, retry_ms);
  const chunksUnderWay = threadLanes(queue.chunksAtOnce);
  const ending = new AbortController();

  let writing: Promise<unknown> | undefined;
  /** Resolves when everything known by now is written. One at a time: while the disk is full, all wait for the one that tries. */
  const settle = async (): Promise<void> => {
    while (recording.waiting() > 0 && takes) {
      writing ??= durably.write(writeBatch).finally(() => {
        writing = undefined;
      });
      if ((await writing) === false) return;
    }
  };
  const rate = rateMeter();
  let lookedAt = 0;
  rate.note(lookedAt, now().getTime());
  const writeBatch = (): void => {
    if (!takes) return;
    const batch = recording.waiting();
    recording.write();
    lookedAt += batch;
    rate.note(lookedAt, now().getTime());
    tell();
  };

  const sift = (pairings: readonly PositionedPairing[]): Sifted =>
    sieve.sift(
      pairings.filter(({ position }) => recording.isOpen(position)),
      {
        stored: (pairing, fingerprint, verdict) =>
          recording.add({
            position: pairing.position,
            outcome: 'stored',
            store: () => {
              tie(pairing, fingerprint);
              return verdict;
            },
          }),
      },
    );

  /** So that the badge of this very lamp and dimmer shows the verdict, whoever else it was judged for. */
  const tie = ({ lamp, dimmer, count }: PositionedPairing, fingerprint: string): void =>
    judgedPairs.tie(verdictIdOf(fingerprint), {
      dimmer: parts.dimmer(dimmer),
      groups: [{ lamp: parts.lamp(lamp), count }],
      plain: template.plain,
    });

  const deliverTo = (chunk: Chunk) => {
    const questions = new Map(chunk.questions.map((question) => [question.position, question]));
    return (answers: readonly Answer[]): void => {
      const at = now();
      for (const answer of answers) {
        const question = questions.get(answer.position);
        if (!takes || question?.fingerprint !== answer.fingerprint) continue;
        const { position } = question;
        const asked = askedPairingOf(chunk, question);
        if (answer.ok) {
          const { judgement, took_ms } = answer;
          recording.add({
            position,
            outcome: 'judged',
            took_ms,
            store: () => {
              const verdict = storeJudgement(deps, asked, judgement, at);
              tie(positions.at(position), question.fingerprint);
              return verdict;
            },
          });
        } else {
          const { failure } = answer;
          logger.warn({ screening: id, position, failure }, 'pairing given up');
          recording.add({
            position,
            outcome: 'failed',
            store: () => {
              storeFailure(deps, seq, position, asked, failure);
              return 0;
            },
          });
        }
      }
    };
  };

  /** Until the page is whole or the run ends. */
  const workPage = async (pairings: readonly PositionedPairing[], first: Sifted): Promise<void> => {
    for (let sifted = first; ; sifted = sift(pairings)) {
      try {
        if (ending.signal.aborted) return;
        if (sifted.chunk !== null) {
          const end = await queue.judge(sifted.chunk, deliverTo(sifted.chunk));
          await settle();
          if (end.kind === 'stopped') return;
          if (end.kind === 'done') state.end('queue-unreachable');
          else {
            state.begin({ reason: 'queue-unreachable', detail: end.detail });
            await waitFor(retry_ms, ending.signal);
          }
        } else if (sifted.underWay.length > 0) await Promise.race(sifted.underWay);
        else return;
      } finally {
        sifted.release();
      }
    }
  };

  const walk = async (): Promise<void> => {
    const breathe = pacing();
    let fault: unknown;
    for (let page = row.open_page; page < positions.pages && !ending.signal.aborted && fault === undefined; page += 1) {
      const pairings = positions.page(page);
      if (recording.open(page, pairings.length).length > 0) {
        const sifted = sift(pairings);
        if (sifted.chunk === null && sifted.underWay.length === 0) {
          sifted.release();
        } else {
          await chunksUnderWay.enter('background');
          void workPage(pairings, sifted)
            .catch((error) => {
              fault = error;
            })
            .finally(chunksUnderWay.leave);
        }
        // Looking a page up and writing it down are a stretch of work each.
        await breathe();
        if (recording.waiting() >= BATCH) await settle();
      }
      await breathe();
    }
    await chunksUnderWay.idle();
    if (fault !== undefined) throw fault;
    await settle();
  };

  const run = async (): Promise<boolean> => {
    const timer = setInterval(() => void settle().catch((error) => logger.warn({ err: error }, 'writing failed')), WRITE_AT_LEAST);
    try {
      await walk();
      if (ending.signal.aborted) return false;
      return await durably.write(() => screenings.change(seq, { state: 'finished', at: now().toISOString() }));
    } finally {
      clearInterval(timer);
      takes = false;
      tell();
    }
  };

  const ended = run();
  return {
    id,
    ended,
    pause: state.pause,
    perHour: () => rate.perHour(now().getTime()),
    stop: () => {
      ending.abort();
      durably.giveUp();
    },
    cancel: () => {
      ending.abort();
      durably.giveUp();
      try {
        if (takes) recording.write();
      } catch (error) {
        // What cannot be written now is lost with the screening that nobody wants any more.
        if (diskTrouble(error) === undefined) throw error;
      }
      takes = false;
    },
  };
}
