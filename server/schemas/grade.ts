/** The grades of a verdict, and the corners at which they are given. */
import { z } from 'zod';

export const GRADES = ['suitable', 'conditional', 'unsuitable', 'undetermined'] as const;

export const gradeField = z
  .enum(GRADES)
  .describe(
    'suitable: every lit dial position is steady, up and down, and the currents are within the ratings, at every corner. conditional: so under the stated conditions. unsuitable: no such range, or a rating is exceeded. undetermined: it hinges on a value that was assumed.',
  );
export const cornerName = z
  .enum(['nominal', 'low-mains-cold', 'high-mains-cold', 'typical-currents'])
  .describe(
    'nominal: the mains as stated, the stated maximum currents. low-mains-cold, high-mains-cold: the ends of the supply band, with the currents of a dimmer switched on cold. typical-currents: the typical ones, where given.',
  );

export const lowestDialField = z
  .number()
  .nullable()
  .describe('Lowest dial setting of the steady range where the grade is conditional, else null.');

const eachPolarity = z.object({ positive: z.number(), negative: z.number() });

export const cornerResult = z.object({
  name: cornerName,
  mainsVoltage_V: z.number(),
  latchingCurrent_mA: eachPolarity,
  holdingCurrent_mA: eachPolarity,
  grade: gradeField,
  lowestDial_pct: lowestDialField,
});

/** How the pairing is judged with one of the circuits that its lamps may have. */
export const variantGrade = z.object({
  name: z.string(),
  grade: gradeField,
  decidedBy: cornerName,
  lowestDial_pct: lowestDialField,
  shown: z.boolean().describe('The worst of them, whose evidence the verdict shows.'),
});
