/**
 * What draws the lamp's current behind its input, by kind, as asked and as judged. Two kinds are not circuits: a class stands for a range
 * of them, and a phase table is fitted to one.
 */
import { z } from 'zod';
import { LAMP_CLASSES } from '../../model/index.ts';
import { defaultText, PHASE_TABLE_DEFAULTS, RESERVOIR_DEFAULTS } from '../verdicts/pairing-defaults.ts';
import { choice, list, numberAt, quantity, type Report, reportNotRising, valueAt, withRule } from './quantities.ts';

const resistiveKind = z.literal('resistive').describe('A plain resistance, no bridge: filament and halogen lamps, heaters.');
const ivTableKind = z
  .literal('iv-table')
  .describe('Current as straight lines over the voltage behind the bridge: anything that can be measured with a steady voltage.');
const reservoirKind = z
  .literal('reservoir')
  .describe('Bridge, surge resistor and reservoir capacitor, drained at constant power or current: plain non-dimmable drivers.');
const phaseTableKind = z
  .literal('phase-table')
  .describe(
    'Current against phase, recorded on an undimmed sine: it is fitted to an iv-table or a reservoir, and refused where neither fits.',
  );
const classKind = z
  .literal('class')
  .describe('Known only by the kind of its input stage: judged with each of a few circuits that span the kind, at the rated power.');

const lampClass = choice(LAMP_CLASSES, { is: 'Kind of the input stage' });

const resistance_Ohm = quantity('Ohm', 1, 1_000_000, { is: 'Resistance of the hot lamp' });

const ivPoints = withRule(
  list(
    z.strictObject({
      voltage_V: quantity('V', 0, 600, { is: 'Voltage behind the bridge' }),
      current_mA: quantity('mA', 0, 5000, { is: 'Current at that voltage' }),
    }),
    2,
    64,
    'points',
    'The curve, sorted by voltage, rising',
  ),
  (sent, report) => reportNotRising(sent, ['voltage_V'], 'V', report),
);

const reservoirFields = {
  capacitance_uF: quantity('uF', 0.01, 10_000, { is: 'Reservoir capacitor' }),
  surgeResistance_Ohm: quantity('Ohm', 0.1, 1000, {
    is: 'Resistor before the reservoir',
    otherwise: RESERVOIR_DEFAULTS.surgeResistance_Ohm,
  }),
  power_W: quantity('W', 0.1, 1000, { is: 'Power that drains the reservoir; give this or current_mA' }).optional(),
  current_mA: quantity('mA', 0.1, 5000, { is: 'Current that drains the reservoir; give this or power_W' }).optional(),
  minimumVoltage_V: quantity('V', 1, 400, {
    is: 'Reservoir voltage below which the drain stops',
    otherwise: RESERVOIR_DEFAULTS.minimumVoltage_V,
  }),
};

export const phaseTableFields = {
  voltage_V: quantity('V', 85, 265, { is: 'R.m.s. voltage of the sine it was recorded on' }),
  frequency_Hz: quantity('Hz', 45, 65, { is: 'Frequency of that sine' }),
};

/** Only a record that is fitted to a reservoir makes use of it. */
export const minimumVoltageAskedOfTable = quantity('V', 1, 400, {
  is: 'Where a reservoir is fitted: its voltage below which the drain stops, which an undimmed record does not show',
  otherwise: PHASE_TABLE_DEFAULTS.minimumVoltage_V,
});

export const phasePoints = withRule(
  list(
    z.strictObject({
      phase_deg: quantity('deg', 0, 360, { is: 'Phase from the rising zero crossing' }),
      current_mA: quantity('mA', -50_000, 50_000, { is: 'Current at that phase' }),
    }),
    8,
    720,
    'points',
    'The record, sorted by phase, rising, over one half-cycle or a whole cycle',
  ),
  (sent, report) => {
    reportNotRising(sent, ['phase_deg'], 'deg', report);
    reportHalfCycleNotCovered(sent, report);
  },
);

export const askedLoad = z
  .discriminatedUnion('kind', [
    z.strictObject({
      kind: resistiveKind,
      resistance_Ohm: resistance_Ohm
        .optional()
        .describe('Resistance of the hot lamp. 1 to 1000000 Ohm. Default ratedVoltage_V squared over ratedPower_W.'),
    }),
    z.strictObject({ kind: ivTableKind, points: ivPoints }),
    withRule(
      z.strictObject({
        kind: reservoirKind,
        ...reservoirFields,
        surgeResistance_Ohm: reservoirFields.surgeResistance_Ohm.optional(),
        minimumVoltage_V: reservoirFields.minimumVoltage_V
          .optional()
          .describe(`Reservoir voltage below which the drain stops. 1 to 400 V. ${defaultText(RESERVOIR_DEFAULTS.minimumVoltage_V)}`),
      }),
      reportDrainNotOne,
    ),
    z.strictObject({
      kind: phaseTableKind,
      ...phaseTableFields,
      points: phasePoints,
      minimumVoltage_V: minimumVoltageAskedOfTable.optional(),
    }),
    z.strictObject({ kind: classKind, class: lampClass }),
  ])
  .describe('What draws the current, by kind.');

export const judgedTable = z.object({
  kind: phaseTableKind,
  ...phaseTableFields,
  points: phasePoints,
  minimumVoltage_V: minimumVoltageAskedOfTable,
});
export const judgedClass = z.object({ kind: classKind, class: lampClass });

/** of a lamp that is given by its circuit */
export const judgedLoad = z.discriminatedUnion('kind', [
  z.object({ kind: resistiveKind, resistance_Ohm }),
  z.object({ kind: ivTableKind, points: ivPoints }),
  z.object({ kind: reservoirKind, ...reservoirFields }),
]);

function reportDrainNotOne(sent: unknown, report: Report): void {
  const given = ['power_W', 'current_mA'].filter((field) => valueAt(sent, field) !== undefined);
  if (given.length === 0) report(['power_W'], 'is missing: give power_W or current_mA');
  if (given.length === 2) report(['current_mA'], 'must not be given together with power_W: the drain is one or the other');
}

/** Half a cycle must be there to within one sample, the longest: a record of 0, 1, ... 179 degrees covers it, since 180 repeats 0. */
function reportHalfCycleNotCovered(sent: unknown, report: Report): void {
  if (!Array.isArray(sent) || sent.length < 2) return;
  const first = numberAt(sent, 0, 'phase_deg');
  const last = numberAt(sent, sent.length - 1, 'phase_deg');
  if (first === undefined || last === undefined || last <= first) return;
  const phases = sent.map((_, index) => numberAt(sent, index, 'phase_deg') ?? Number.NaN);
  const step = phases.reduce((most, phase, index) => Math.max(most, phase - (phases[index - 1] ?? phase)), 0);
  if (Number.isNaN(step)) return;
  // a millionth of a degree for the rounding of the division
  if (last - first + step < 180 - 1e-6) {
    report(
      [],
      `must cover a half-cycle: these points span ${Number((last - first).toPrecision(6))} deg, 180 are needed, to within one sample`,
    );
  }
}
