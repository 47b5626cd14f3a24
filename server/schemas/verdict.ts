/** A verdict on the wire: grade, reasons and evidence for one pairing. */
import { z } from 'zod';
import { dialRow } from './dial-row.ts';
import { foundClass, foundFit } from './found-lamp.ts';
import { cornerName, cornerResult, gradeField, variantGrade } from './grade.ts';
import { lampCounts } from './lamp-counts.ts';
import { judgedPairing } from './pairing.ts';
import { remedies } from './remedy.ts';
import { wouldSettle } from './would-settle.ts';

const count = z.int().min(0);

export const createdAtField = z.string().meta({ format: 'date-time', description: 'When it was computed, UTC.' });
export const summaryField = z.string().describe('The verdict in one sentence.');

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
      corner: cornerName.describe('The corner at which it holds.'),
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
  corners: z.array(cornerResult).describe('The corners that were judged, nominal first. `dial` is the nominal one.'),
  sparedCorners: z.array(cornerName).describe('Corners that could not have changed the grade any more.'),
  decidedBy: cornerName.describe('The corner with the worst grade; nominal where none does worse.'),
  wouldSettle: wouldSettle
    .nullable()
    .describe('What would settle an undetermined grade; null where it hinges on nothing that was assumed.'),
  variants: z
    .array(variantGrade)
    .describe(
      'The circuits that the lamps may have, where they are not known by their circuit, each judged; empty where there is only one.',
    ),
  lampClasses: z.array(foundClass).describe('Lamps known by their class: what was judged for them.'),
  fits: z.array(foundFit).describe('Lamps given as a phase table: what was fitted to it.'),
  lampCounts: lampCounts.nullable().describe('The grade for each count that `options.lampCount` asked for, else null.'),
  remedies: remedies.nullable().describe('What `options.remedies` asked for, else null.'),
  counters: z
    .object({ halfCycles: count, steps: count, events: count, modesBuilt: count, stops: count, sparedStops: count })
    .describe('Work the simulation did; a stop is one dial position of one sweep, spared where the grade was decided without it.'),
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
