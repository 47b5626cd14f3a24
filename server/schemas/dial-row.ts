/** A row of a verdict's evidence: what one dial position does on one sweep. */
import { z } from 'zod';

const dialState = z
  .enum(['dark', 'skipping', 're-firing', 'dropping-out', 'lopsided', 'wandering', 'undecided', 'steady'])
  .describe('The headline of what this dial position does.');

const count = z.int().min(0);

export const dialRow = z
  .object({
    sweep: z.enum(['up', 'down']).describe('Up: the dial rises from dark. Down: it falls again, everything carried over.'),
    position_pct: z.number().describe('Dial position, 100 is brightest.'),
    state: dialState,
    alsoStates: z.array(dialState).describe('Other states that hold as well.'),
    firings: z.object({ min: z.number(), mean: z.number(), max: z.number() }).describe('Gate firings a half-cycle; one is right.'),
    silentShare: z.number().describe('Share of half-cycles without a firing, 0 to 1.'),
    repeatsAfter_halfCycles: count.nullable().describe('Length of the pattern that repeats; null where it wanders.'),
    settled_halfCycles: count.describe('Half-cycles simulated before observing.'),
    observed_halfCycles: count.describe(
      'Half-cycles observed. Where each is the mirror image of the one before, one was simulated and stands for both polarities.',
    ),
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
    margins: z
      .object({
        latching_pct: z.number().nullable().describe('Change of the latching current.'),
        holding_pct: z.number().nullable().describe('Change of the holding current, or of the turn-off time.'),
        breakover_pct: z.number().nullable().describe('Change of the breakover voltage of the diac.'),
      })
      .describe('The smallest change that would have brought another outcome about; null where the question did not arise.'),
    nearEdge: z.boolean().describe('One of the margins is so small that a part a hair different would do something else.'),
  })
  .meta({ id: 'DialRow', description: 'What one dial position does on one sweep.' });
