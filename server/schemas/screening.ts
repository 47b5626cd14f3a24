/** A screening on the wire: what is asked for, and how it stands. */
import { z } from 'zod';
import { entryId, tagField } from './entry.ts';
import { askedPairing } from './pairing.ts';
import { list, wholeNumber, withRule } from './quantities.ts';

/** an id is up to 64 characters, so that a list of so many fits into a body */
const MOST_IDS = 10_000;
const MOST_COUNTS = 20;

function selection(of: 'dimmer' | 'lamp') {
  const ids = withRule(list(entryId(of), 1, MOST_IDS, 'ids', `These ${of}s of the catalogue, in this order`), (sent, report) => {
    if (!Array.isArray(sent)) return;
    const seen = new Set<unknown>();
    for (const [index, id] of sent.entries()) {
      if (seen.has(id)) report([index], 'must not be there twice');
      seen.add(id);
    }
  });
  const search = z
    .string({ error: 'must be text of 1 to 200 characters' })
    .min(1, { error: 'must be text of 1 to 200 characters' })
    .max(200, { error: 'must be text of 1 to 200 characters' })
    .describe(`Every ${of} whose name has words that begin like these.`);
  return z
    .union([
      z.strictObject({ ids }),
      z.strictObject({ tag: tagField.describe(`Every ${of} with this tag.`) }),
      z.strictObject({ search }),
      z.strictObject({
        all: z.literal(true, { error: 'must be true' }).describe(`Every ${of} of the catalogue.`),
      }),
    ])
    .describe(`Which ${of}s of the catalogue. Frozen when the screening starts: later edits change nothing.`);
}

const counts = withRule(
  list(wholeNumber(1, 500, { is: 'How many lamps of a kind are on the circuit' }), 1, MOST_COUNTS, 'lamp counts', 'Rising'),
  (sent, report) => {
    if (!Array.isArray(sent)) return;
    for (const [index, count] of sent.entries()) {
      if (index > 0 && count <= sent[index - 1]) report([index], 'must be above the one before it: the list is sorted, rising');
    }
  },
);

const { mains, addedLoad, options } = askedPairing.shape;
const frameFields = { mains, addedLoad, options };

const instant = (description: string) => z.string().meta({ format: 'date-time', description });

const startAt = z.iso
  .datetime({ offset: true, error: 'must be an instant with its offset, like 2026-03-02T22:00:00Z' })
  .optional()
  .describe('When to begin; at once where absent. What is selected is then frozen at that time.');

export const EXAMPLE_SCREENING = {
  lamps: { tag: 'guest rooms' },
  dimmers: { all: true },
  counts: [1, 4],
  mains: { voltage_V: 230, frequency_Hz: 50 },
};

const selected = { lamps: selection('lamp'), dimmers: selection('dimmer') };

export const askedScreening = z
  .strictObject({
    ...selected,
    counts: counts
      .default([1])
      .describe('How many lamps of a kind are on the circuit: each pairing is judged with each. Default one lamp.'),
    ...frameFields,
    startAt,
  })
  .meta({
    id: 'AskedScreening',
    description: 'Every selected lamp with every selected dimmer, at every count.',
    examples: [EXAMPLE_SCREENING],
  });

/** As it is kept and shown: with its counts, and without the time, which stands beside it. */
const productScreening = z.object({ ...selected, counts, ...frameFields });

/** What the daily re-screening asks for: every stale verdict that was given in this frame. */
const staleScreening = z.object({ stale: z.literal(true), ...frameFields });

export const SCREENING_STATES = ['queued', 'running', 'paused', 'finished', 'cancelled'] as const;
export const PAUSES = ['disk-full', 'queue-unreachable', 'internal-error'] as const;

const whole = (description: string) => z.int().describe(description);

export const screeningCounts = z.object({
  total: whole('Pairings in all.'),
  stored: whole('Of these, judged before this screening came to them.'),
  done: whole('Judged by this screening.'),
  failed: whole('Given up: the results say why.'),
  toGo: whole('Still to be looked at.'),
});

export const screening = z
  .object({
    id: z.string(),
    state: z.enum(SCREENING_STATES),
    pause: z
      .object({ reason: z.enum(PAUSES), detail: z.string() })
      .nullable()
      .describe('Why it is paused. It goes on by itself when that is over.'),
    waitingFor: z.string().nullable().describe('What it waits for although nothing is wrong, such as a worker; null where it does not.'),
    createdAt: instant('When it was asked for, UTC.'),
    startAt: instant('When it was to begin.').nullable(),
    startedAt: instant('When it began.').nullable(),
    endedAt: instant('When it was finished or cancelled.').nullable(),
    modelVersion: z.string(),
    request: z.union([productScreening, staleScreening]).describe('What was asked for.'),
    selected: z.object({ lamps: whole('Lamps.'), dimmers: whole('Dimmers.') }).describe('How many were selected.'),
    counts: screeningCounts,
    rate_perHour: z.number().nullable().describe('Pairings an hour over the last minutes; null where nothing was looked at.'),
    estimate: z
      .object({
        remaining_s: z.number().describe('Until everything is looked at, without waiting for `startAt` or for other screenings.'),
        endsAt: instant('The same as an instant.'),
        basis: z.string().describe('What it was reckoned from.'),
      })
      .nullable()
      .describe('From measured speed; null until something was measured, and at the end.'),
  })
  .meta({ id: 'Screening', description: 'A lamp list judged against a shelf of dimmers, in the background.' });

export const acceptedScreening = screening
  .extend({
    foundStored: z
      .object({
        pairings: whole('How many are stored already.'),
        basis: z
          .enum(['counted', 'sampled'])
          .describe('`sampled`: reckoned from evenly spread pairings, where there are too many to look at.'),
        lookedAt: whole('How many were looked at for it.'),
      })
      .describe('How many pairings are stored already.'),
  })
  .meta({ id: 'AcceptedScreening', description: 'A screening as it was accepted.' });

export type AskedScreening = z.output<typeof askedScreening>;
export type StaleScreening = z.output<typeof staleScreening>;
export type ScreeningRequest = z.output<typeof productScreening> | StaleScreening;
export type Selection = AskedScreening['lamps'];
export type ScreeningAnswer = z.output<typeof screening>;
export type AcceptedAnswer = z.output<typeof acceptedScreening>;
export type PauseReason = (typeof PAUSES)[number];
