/** Parameters and answers of the calls that read one verdict: its id, its fields, its waveforms. */
import { z } from 'zod';
import { choiceOf, namesText, numberText } from './url-values.ts';
import { VERDICT_FIELDS } from './verdict.ts';

export const verdictParams = z.strictObject({
  id: z
    .string()
    .regex(/^[0-9a-f]{26}$/, { error: 'must be 26 hexadecimal digits in lower case, as `id` of a verdict has them' })
    .describe('Id of a stored verdict.'),
});

export const verdictQuery = z.strictObject({
  fields: namesText(
    VERDICT_FIELDS,
    'Only these fields of the verdict, as `grade,summary,conditions`: leaves out the dial rows. Absent for all.',
  ).optional(),
});

export const waveformsQuery = z.strictObject({
  dial_pct: numberText(0, 100, 'A dial position the verdict was judged at.'),
  sweep: z
    .enum(['up', 'down'], { error: choiceOf(['up', 'down']) })
    .default('up')
    .describe('Which way the dial came there.'),
});

const column = (description: string) => z.array(z.number()).describe(description);

/** Columns of equal length; `columns` in the order in which a CSV has them. */
export const waveforms = z
  .object({
    verdictId: z.string(),
    modelVersion: z.string(),
    sweep: z.enum(['up', 'down']),
    dial_pct: z.number(),
    columns: z.object({
      time_ms: column('From the rising zero crossing that starts the window.'),
      mainsVoltage_V: column('The mains.'),
      lampVoltage_V: column('From the lamp line to neutral.'),
      lampCurrent_mA: column('Into all lamps and the added load.'),
      dimmerCurrent_mA: column("The dimmer's line current."),
      timingVoltage_V: column('Across the timing capacitor that feeds the diac; zeros for a timed drive.'),
      gateCurrent_mA: column('Into the gate.'),
    }),
  })
  .meta({
    id: 'Waveforms',
    description: "Instantaneous values over the last observed half-cycles of one dial position, of the model's circuit.",
  });

export type WaveformsAnswer = z.output<typeof waveforms>;
