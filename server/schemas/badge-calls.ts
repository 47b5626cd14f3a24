/** Badges on the wire: whose, for which count and mains, and what the JSON form says. */
import { z } from 'zod';
import { entryId } from './entry.ts';
import { gradeField } from './grade.ts';
import { valueAt, withRule } from './quantities.ts';
import { numberText } from './url-values.ts';
import { mainsFrequencyText, mainsVoltageText } from './verdict-list.ts';

export const badgeParams = z.strictObject({ dimmerId: entryId('dimmer'), lampId: entryId('lamp') });

export const badgeQuery = withRule(
  z.strictObject({
    count: numberText(1, 500, 'How many of the lamp are on the circuit; absent for all counts that were judged.', true).optional(),
    mainsVoltage_V: mainsVoltageText.optional(),
    mainsFrequency_Hz: mainsFrequencyText.optional(),
  }),
  (sent, report) => {
    const [voltage, frequency] = [valueAt(sent, 'mainsVoltage_V'), valueAt(sent, 'mainsFrequency_Hz')];
    if ((voltage === undefined) !== (frequency === undefined)) {
      report([voltage === undefined ? 'mainsVoltage_V' : 'mainsFrequency_Hz'], 'is missing: voltage and frequency are given together');
    }
  },
);

export const badgeAnswer = z
  .object({
    dimmerId: z.string(),
    lampId: z.string(),
    count: z.int().nullable().describe('The count that was asked for.'),
    state: z
      .enum(['judged', 'outdated', 'not-screened'])
      .describe('outdated: there are verdicts, but none of what the catalogue says now; shown as not screened.'),
    label: z.string().describe('The grade in words.'),
    lines: z.array(z.string()).describe('The conditions that matter, as the picture has them.'),
    sentence: z.string().describe('All of it in one sentence.'),
    grade: gradeField
      .nullable()
      .describe('Of the count that was asked for; without one, conditional where some of the judged counts work and others do not.'),
    counts: z.array(z.int()).describe('The counts it speaks of: those that work, or where none does all that were judged.'),
    judgedCounts: z.array(z.int()),
    lowestDial_pct: z.number().nullable().describe('The dial setting from which all of `counts` are steady; null for the whole dial.'),
    mains: z.object({ voltage_V: z.number(), frequency_Hz: z.number() }).nullable(),
    verdicts: z.array(z.object({ id: z.string(), count: z.int(), grade: gradeField, modelVersion: z.string() })),
    caution: z.string().describe('Show it with the grade.'),
  })
  .meta({ id: 'Badge', description: 'What a badge says.' });

export type BadgeAnswer = z.output<typeof badgeAnswer>;
