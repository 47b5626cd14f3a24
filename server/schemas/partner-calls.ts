/** What goes with an entry, on the wire: the dimmers that suit a lamp, the lamps that suit a dimmer. */
import { z } from 'zod';
import { GRADES, gradeField } from './grade.ts';
import { cursorField, limitField, namesText, nextCursorField } from './url-values.ts';
import { createdAtField, summaryField } from './verdict.ts';
import { countText, mainsFrequencyText, mainsVoltageText } from './verdict-list.ts';

export const DEFAULT_PARTNER_GRADES = ['suitable', 'conditional'] as const;

export const partnerQuery = z.strictObject({
  grade: namesText(GRADES, 'Grades to list, with commas between them. Default suitable,conditional.').optional(),
  count: countText.optional(),
  mainsVoltage_V: mainsVoltageText.optional(),
  mainsFrequency_Hz: mainsFrequencyText.optional(),
  limit: limitField,
  cursor: cursorField,
});

const partner = z
  .object({
    dimmerId: z.string(),
    dimmerRevision: z.int(),
    lampId: z.string(),
    lampRevision: z.int(),
    name: z.string().nullable().describe('Of the partner.'),
    count: z.int().describe('How many of the lamp are on the circuit.'),
    mains: z.object({ voltage_V: z.number(), frequency_Hz: z.number() }),
    grade: gradeField,
    summary: summaryField,
    verdictId: z.string(),
    modelVersion: z.string(),
    createdAt: createdAtField,
  })
  .meta({ id: 'Partner', description: 'A dimmer and a lamp that were judged together, with the newest verdict that still holds.' });

export const partnerList = z.object({
  items: z.array(partner).describe('Newest verdict first; one item for each partner, count and mains.'),
  nextCursor: nextCursorField,
});

export type PartnerQuery = z.output<typeof partnerQuery>;
export type Partner = z.output<typeof partner>;
