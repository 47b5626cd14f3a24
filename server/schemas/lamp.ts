/** The lamp on the wire: its rating, its load, and the parts of its input, as asked about and as judged. */
import { z } from 'zod';
import { defaultText, LAMP_INPUT_DEFAULTS } from '../verdicts/pairing-defaults.ts';
import { askedLoad, judgedClass, judgedLoad, judgedTable } from './lamp-load.ts';
import { numberAt, quantity, quantityOrNull, type Report, valueAt, withRule } from './quantities.ts';

const byKind = (field: 'seriesResistance_Ohm' | 'capacitance_nF') =>
  Object.entries(LAMP_INPUT_DEFAULTS)
    .map(([kind, defaults]) => `${kind}: ${defaultText(defaults[field])}`)
    .join(' ');

const seriesResistance_Ohm = quantity('Ohm', 0.1, 10_000, {
  is: 'Fusible or series resistor',
  otherwise: byKind('seriesResistance_Ohm'),
});

const inputFields = {
  seriesResistance_Ohm,
  seriesCapacitance_nF: quantity('nF', 0, 100_000, {
    is: 'Capacitor in series with the whole lamp (a capacitive dropper, with 1 MOhm across it), 0 for none',
    otherwise: LAMP_INPUT_DEFAULTS['iv-table'].seriesCapacitance_nF,
  }),
  inductance_mH: quantity('mH', 0, 1000, {
    is: 'Interference inductor, 0 for none',
    otherwise: LAMP_INPUT_DEFAULTS['iv-table'].inductance_mH,
  }),
  inductorLoss_kOhm: quantityOrNull('kOhm', 0.01, 10_000, {
    is: "The inductor's loss as a resistance in parallel, null for none",
    otherwise: 'Default 1 kOhm for each mH, at least 1 kOhm; null without an inductor.',
  }),
  capacitance_nF: quantity('nF', 0, 10_000, { is: 'Capacitor across the input, 0 for none', otherwise: byKind('capacitance_nF') }),
};

const damper = z
  .strictObject({
    resistance_Ohm: quantity('Ohm', 1, 100_000, { is: 'Damper resistor' }),
    capacitance_nF: quantity('nF', 0, 10_000, { is: 'Damper capacitor, 0 for none' }),
  })
  .nullable()
  .describe('R-C across the input, or null. Default null.');

const bleeder = z
  .discriminatedUnion('kind', [
    z.strictObject({
      kind: z.literal('resistor'),
      resistance_kOhm: quantity('kOhm', 0.1, 10_000, { is: 'Bleeder resistor' }),
    }),
    z.strictObject({
      kind: z.literal('resistor-capacitor'),
      resistance_Ohm: quantity('Ohm', 1, 100_000, { is: 'Bleeder resistor' }),
      capacitance_nF: quantity('nF', 0, 10_000, { is: 'Bleeder capacitor, 0 for none' }),
    }),
    z.strictObject({
      kind: z.literal('active'),
      current_mA: quantity('mA', 0, 1000, { is: 'Current up to which it draws what the lamp does not' }),
      below_V: quantity('V', 1, 400, { is: 'Rectified voltage above which it lets go' }),
    }),
  ])
  .nullable()
  .describe('What keeps a current flowing while the lamp draws little, or null. Default null.');

const ratedPower_W = quantityOrNull('W', 0.1, 2000, { is: 'Rated power of one lamp', otherwise: 'Default null: not stated.' });
const ratedVoltage_V = quantityOrNull('V', 50, 300, {
  is: 'Rated voltage',
  otherwise: 'Default null; for a resistive load without resistance_Ohm the mains voltage.',
});

const powerFactor = z
  .number({ error: 'must be a number above 0, up to 1, or null' })
  .gt(0)
  .max(1)
  .nullable()
  .describe(
    'Power factor on undimmed mains, of a lamp that is known by its class: leaves out the circuits of the class that have another. Above 0, up to 1, or null. Default null: not stated.',
  );

/** A lamp as it is asked about. */
export const askedLamp = withRule(
  z.strictObject({
    ratedPower_W: ratedPower_W.optional(),
    ratedVoltage_V: ratedVoltage_V.optional(),
    powerFactor: powerFactor.optional(),
    load: askedLoad,
    input: z
      .strictObject({ ...z.strictObject(inputFields).partial().shape, damper: damper.optional(), bleeder: bleeder.optional() })
      .optional()
      .describe("The lamp's input, between its terminals and its load."),
  }),
  (sent, report) => {
    const kind = valueAt(sent, 'load', 'kind');
    const isUnrated = numberAt(sent, 'ratedPower_W') === undefined;
    if (kind === 'resistive' && valueAt(sent, 'load', 'resistance_Ohm') === undefined && isUnrated) {
      report(['load', 'resistance_Ohm'], 'is missing: give it, or ratedPower_W (with ratedVoltage_V where it is not the mains voltage)');
    }
    if (kind === 'class' && isUnrated)
      report(['ratedPower_W'], 'is missing: a class says what a lamp is like, its rated power how large it is');
    if (kind !== 'class' && numberAt(sent, 'powerFactor') !== undefined) {
      report(['powerFactor'], 'must be absent: it is looked at only where the load is a class');
    }
    reportUnusedInput(sent, kind, report);
  },
);

/** A class brings its own input, and a record shows all of it but the series resistor. */
function reportUnusedInput(sent: unknown, kind: unknown, report: Report): void {
  const input = valueAt(sent, 'input');
  if (kind === 'class' && input !== undefined) report(['input'], 'must be absent where the load is a class: the class says what it may be');
  if (kind !== 'phase-table' || typeof input !== 'object' || input === null) return;
  for (const field of Object.keys(input)) {
    if ((field in inputFields || field === 'damper' || field === 'bleeder') && field !== 'seriesResistance_Ohm') {
      report(['input', field], 'must be absent where the load is a phase table: the record shows it, or it is taken as having none');
    }
  }
}

/** A lamp given by its circuit, every part filled in. */
export const judgedCircuitLamp = z.object({
  ratedPower_W,
  ratedVoltage_V,
  load: judgedLoad,
  input: z.object({ ...inputFields, damper, bleeder }),
});

/** A lamp as it was judged: given by its circuit, by a record, or by its class. */
export const judgedLamp = z.union([
  judgedCircuitLamp,
  z.object({ ratedPower_W, ratedVoltage_V, load: judgedTable, input: z.object({ seriesResistance_Ohm }) }),
  z.object({ ratedPower_W: ratedPower_W.unwrap(), ratedVoltage_V, powerFactor, load: judgedClass }),
]);

export type JudgedCircuitLamp = z.output<typeof judgedCircuitLamp>;
