/** What dimmer the lamps of a verdict would want, on the wire. */
import { z } from 'zod';
import { cornerName } from './grade.ts';
import { circuitField, stopCause } from './lamp-counts.ts';

export const requirement = z
  .object({
    verdictId: z.string(),
    modelVersion: z.string().describe('Version of the model that computed it.'),
    createdAt: z.string().meta({ format: 'date-time', description: 'When it was computed, UTC.' }),
    circuit: circuitField,
    points: z
      .array(
        z.object({
          latchingCurrent_mA: z.number(),
          holdingCurrent_mA: z.number(),
          failsAt: z
            .number()
            .nullable()
            .describe('Multiple of both currents at which it was seen to fail; null where nothing fails up to 1 A.'),
          decidedBy: cornerName.nullable().describe('The corner that fails there.'),
          cause: stopCause.nullable(),
          smallerDoes: z.boolean().describe('Half of both currents does as well; false: the boundary is not a plain limit there.'),
        }),
      )
      .describe(
        'The largest currents of one ratio with which the pairing is suitable at every corner: data-sheet maxima at 25 degrees C. By falling ratio of holding to latching current; empty where no currents do.',
      ),
    summary: z.string(),
  })
  .meta({ id: 'Requirement', description: 'The largest latching and holding currents of a dimmer on which these lamps are suitable.' });

export type RequirementAnswer = z.output<typeof requirement>;
