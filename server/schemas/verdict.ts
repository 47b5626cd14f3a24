/** A verdict on the wire: grade, reasons and evidence for one pairing. */
import { z } from 'zod';
import { judgedPairing } from './pairing.ts';

export const GRADES = ['suitable', 'conditional', 'unsuitable', 'undetermined'] as const;

export const gradeField = z
  .enum(GRADES)
  .describe(
    'suitable: every lit dial position is steady, up and down, and the currents are within the ratings. conditional: so under the stated conditions. unsuitable: no such range, or a rating is exceeded. undetermined: it hinges on a value that was assumed.',
  );
export const createdAtField = z.string().meta({ format: 'date-time', description: 'When it was computed, UTC.' });
export const summaryField = z.string().describe('The verdict in one sentence.');

const dialState = z
  .enum(['dark', 'skipping', 're-firing', 'dropping-out', 'lopsided', 'wandering', 'undecided', 'steady'])
  .describe('The headline of what this dial position does.');

const count = z.int().min(0);

const dialRow = z
  .object({
    sweep: z.enum(['up', 'down']).describe('Up: the dial rises from dark. Down: it falls again, everything carried over.'),
    position_pct: z.number().describe('Dial position, 100 is brightest.'),
    state: dialState,
    alsoStates: z.array(dialState).describe('Other states that hold as well.'),
    firings: z.object({ min: z.number(), mean: z.number(), max: z.number() }).describe('Gate firings a half-cycle; one is right.'),
    silentShare: z.number().describe('Share of half-cycles without a firing, 0 to 1.'),
    repeatsAfter_halfCycles: count.nullable().describe('Length of the pattern that repeats; null where it wanders.'),
    settled_halfCycles: count.describe('Half-cycles simulated before observing.'),
    observed_halfCycles: count.describe('Half-cycles observed.'),
    failedLatches: z.number().describe('Gate pulses a half-cycle, on average, that ended before the triac reached its latching current.'),
    earlyDropOuts: z
      .number()
      .describe("Conductions a half-cycle, on average, that ended well before the lamp's own current would have ended them."),
    firingAngle_deg: z.number().nullable().describe('Mean of the first firing, from the zero crossing; null where dark.'),
    firingAngleSpread_deg: z.number().nullable().describe('Latest less earliest first firing; null where dark.'),
    conductionAngle_deg: z.number().nullable().describe('How long the triac conducts; null where dark.'),
    polarityDifference_pct: z.number().describe('Modulation of energy between the two polarities: difference over sum.'),
    variation_pct: z
      .number()
      .describe('Modulation of half-cycle energy within one polarity, (max - min) / (max + min), the larger of the two.'),
    lampPower_W: z.number().describe('Mean power into all lamps.'),
    rmsCurrent_mA: z.number().describe('R.m.s. line current of the dimmer.'),
    peakCurrent_A: z.number().describe('Peak line current of the dimmer.'),
    dcCurrent_mA: z.number().describe('Direct component of the line current.'),
    diacStuck: z.boolean().describe('The diac stayed on, fed by the timing resistor beyond its holding current.'),
  })
  .meta({ id: 'DialRow', description: 'What one dial position does on one sweep.' });

export const evidence = z.object({
  grade: gradeField,
  summary: summaryField,
  conditions: z
    .array(
      z.object({
        kind: z.literal('lowest-dial'),
        position_pct: z.number().describe('Lowest dial setting the trim must allow.'),
        detail: z.string(),
      }),
    )
    .describe('What must be seen to for the grade to hold.'),
  reasons: z.array(
    z.object({
      code: z.enum([
        're-fires',
        'skips-half-cycles',
        'drops-out',
        'lopsided',
        'wanders',
        'never-lights',
        'dark-low-on-dial',
        'pop-on',
        'failed-latch',
        'stuck-diac',
        'undecided',
        'over-current-rating',
        'over-peak-rating',
        'over-load-rating',
        'under-load-rating',
      ]),
      dial_pct: z.array(z.number()).min(2).max(2).nullable().describe('From and to on the dial; null where no position is meant.'),
      detail: z.string(),
    }),
  ),
  dial: z.array(dialRow).describe('One row a dial position and sweep.'),
  popOn: z
    .object({
      litFrom_pct: z.number().nullable().describe('Lowest position lit on the way up; null where it never lights.'),
      outBelow_pct: z.number().nullable().describe('Lowest position still lit on the way down; null where it never lights.'),
    })
    .describe('A lamp that lights higher on the way up than it goes out on the way down pops on.'),
  corners: z.array(z.object({ name: z.string(), grade: gradeField })).describe('The grade at each corner that was judged.'),
  counters: z.object({ halfCycles: count, steps: count, events: count, modesBuilt: count }).describe('Work the simulation did.'),
});

export const verdict = z
  .object({
    id: z.string(),
    modelVersion: z.string().describe('Version of the model that computed it.'),
    createdAt: createdAtField,
    pairing: judgedPairing,
    ...evidence.shape,
    assumptions: z
      .array(
        z.object({
          path: z.string().describe('Where the value stands in `pairing`; `model.…` for what no field can change.'),
          value: z.union([z.string(), z.number(), z.boolean(), z.null(), z.array(z.number())]),
          basis: z.string().describe('What the value rests on.'),
        }),
      )
      .describe('Every default that was filled in when the verdict was computed, and what the model takes for granted.'),
    cautions: z.array(z.string()).describe('What holds whatever the grade. Show it with the grade.'),
  })
  .meta({ id: 'Verdict', description: 'Grade, reasons and evidence for one pairing.' });

export const VERDICT_FIELDS = Object.keys(verdict.shape) as (keyof Verdict)[];

export type Verdict = z.output<typeof verdict>;
export type Evidence = z.output<typeof evidence>;
