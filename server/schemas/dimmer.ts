/**
 * The dimmer on the wire: as it is asked about (only the two triac currents are required) and as it was judged (nothing left open).
 * Both are built from the same fields.
 */
import { z } from 'zod';
import {
  CHOKE_DEFAULTS,
  DIAC_DEFAULTS,
  DIMMER_DEFAULTS,
  DRIVE_KIND_DEFAULT,
  defaultText,
  RATINGS_DEFAULTS,
  SECOND_SECTION_DEFAULT,
  SNUBBER_DEFAULTS,
  TIMED_DEFAULTS,
} from '../verdicts/pairing-defaults.ts';
import { breakoverField, POLARITIES, readPolarity, reportHoldingAboveLatching, triacCurrentField } from './polarity.ts';
import { choice, numberAt, quantity, quantityOrNull, type Report, valueAt, withRule } from './quantities.ts';

const chokeFields = {
  inductance_mH: quantity('mH', 0, 100, {
    is: 'Inductance of the interference choke, 0 for none',
    otherwise: CHOKE_DEFAULTS.inductance_mH,
  }),
  resistance_Ohm: quantity('Ohm', 0.001, 50, { is: 'Series resistance of the choke', otherwise: CHOKE_DEFAULTS.resistance_Ohm }),
  lossResistance_kOhm: quantityOrNull('kOhm', 0.01, 1000, {
    is: 'Core loss as a resistance in parallel, null for none',
    otherwise: CHOKE_DEFAULTS.lossResistance_kOhm,
  }),
};

const snubber = z.strictObject({
  resistance_Ohm: quantity('Ohm', 1, 100_000, { is: 'Snubber resistor', otherwise: SNUBBER_DEFAULTS.resistance_Ohm }),
  capacitance_nF: quantity('nF', 0, 10_000, { is: 'Snubber capacitor, 0 for none', otherwise: SNUBBER_DEFAULTS.capacitance_nF }),
});

const ratingsFields = {
  maximumCurrent_A: quantityOrNull('A', 0.01, 100, { is: 'Rated r.m.s. current', otherwise: RATINGS_DEFAULTS.maximumCurrent_A }),
  maximumPeakCurrent_A: quantityOrNull('A', 0.01, 2000, {
    is: 'Rated repetitive peak current',
    otherwise: RATINGS_DEFAULTS.maximumPeakCurrent_A,
  }),
  minimumLoad_W: quantityOrNull('W', 0, 10_000, { is: 'Stated minimum load', otherwise: RATINGS_DEFAULTS.minimumLoad_W }),
  maximumLoad_W: quantityOrNull('W', 0.1, 10_000, { is: 'Stated maximum load', otherwise: RATINGS_DEFAULTS.maximumLoad_W }),
};

const diacFields = {
  fixedResistance_kOhm: quantity('kOhm', 0.1, 1000, {
    is: 'Resistor in series with the potentiometer',
    otherwise: DIAC_DEFAULTS.fixedResistance_kOhm,
  }),
  potentiometer_kOhm: quantity('kOhm', 0.1, 10_000, {
    is: 'Whole track of the potentiometer, linear: all of it at dial 0 %, none at 100 %',
    otherwise: DIAC_DEFAULTS.potentiometer_kOhm,
  }),
  capacitance_nF: quantity('nF', 1, 10_000, { is: 'Timing capacitor', otherwise: DIAC_DEFAULTS.capacitance_nF }),
  breakover_V: breakoverField(defaultText(DIAC_DEFAULTS.breakover_V)),
  residual_V: quantity('V', 0, 200, { is: 'On-drop of the diac at small current', otherwise: DIAC_DEFAULTS.residual_V }),
  diacResistance_Ohm: quantity('Ohm', 0.1, 10_000, { is: 'On-resistance of the diac', otherwise: DIAC_DEFAULTS.diacResistance_Ohm }),
  diacHoldingCurrent_mA: quantity('mA', 0.001, 1000, {
    is: 'Current below which the diac turns off',
    otherwise: DIAC_DEFAULTS.diacHoldingCurrent_mA,
  }),
  gateResistance_Ohm: quantity('Ohm', 1, 100_000, { is: 'Resistor into the gate', otherwise: DIAC_DEFAULTS.gateResistance_Ohm }),
  gateVoltage_V: quantity('V', 0, 5, { is: 'Voltage of the gate', otherwise: DIAC_DEFAULTS.gateVoltage_V }),
  gateThreshold_mA: quantity('mA', 0.01, 1000, { is: 'Gate current that fires the triac', otherwise: DIAC_DEFAULTS.gateThreshold_mA }),
};

const secondSection = z
  .strictObject({
    resistance_kOhm: quantity('kOhm', 0.1, 1000, { is: 'Resistor between the two timing sections' }),
    capacitance_nF: quantity('nF', 0, 10_000, { is: 'Timing capacitor of the second section, 0 for none' }),
  })
  .nullable()
  .describe(`A second timing section before the diac, or null. ${defaultText(SECOND_SECTION_DEFAULT)}`);

const timedFields = {
  firingAngleFull_deg: quantity('deg', 0, 179, {
    is: 'Firing angle at dial 100 %, from the zero crossing of the mains',
    otherwise: TIMED_DEFAULTS.firingAngleFull_deg,
  }),
  firingAngleLow_deg: quantity('deg', 0, 179, { is: 'Firing angle at dial 0 %', otherwise: TIMED_DEFAULTS.firingAngleLow_deg }),
  gatePulse_us: quantity('us', 1, 10_000, { is: 'Width of a gate pulse', otherwise: TIMED_DEFAULTS.gatePulse_us }),
  pulses: choice(['single', 'train', 'held'], {
    is: 'One gate pulse, a train of them, or one held until the end of the half-cycle',
    otherwise: TIMED_DEFAULTS.pulses,
  }),
  pulseSpacing_us: quantity('us', 1, 10_000, {
    is: 'From the start of one pulse of a train to the start of the next',
    otherwise: TIMED_DEFAULTS.pulseSpacing_us,
  }),
};

/** what a current through the diac follows from, besides the breakover */
const DIAC_OF_ONE_VALUE = {
  residual_V: DIAC_DEFAULTS.residual_V,
  gateVoltage_V: DIAC_DEFAULTS.gateVoltage_V,
  diacResistance_Ohm: DIAC_DEFAULTS.diacResistance_Ohm,
  gateResistance_Ohm: DIAC_DEFAULTS.gateResistance_Ohm,
  diacHoldingCurrent_mA: DIAC_DEFAULTS.diacHoldingCurrent_mA,
};

const shortest = (value: number): string => String(Number(value.toPrecision(3)));

const diacKind = z.literal('diac').describe('A diac discharges the timing capacitor into the gate.');
const timedKind = z.literal('timed').describe('A controller fires the gate at an angle that the dial sets.');

const askedDiac = withRule(
  z.strictObject({ kind: diacKind, ...z.strictObject(diacFields).partial().shape, secondSection: secondSection.optional() }),
  (sent, report) => {
    reportPowerlessDump(sent, report);
    reportDiacThatLetsGo(sent, report);
  },
);
const askedTimed = withRule(z.strictObject({ kind: timedKind, ...z.strictObject(timedFields).partial().shape }), reportTimingOutOfOrder);
const askedRatings = withRule(z.strictObject(ratingsFields).partial(), reportRatingsOutOfOrder);

const plainFields = {
  turnOffTime_us: quantity('us', 0, 1000, {
    is: 'How long the current must stay below the holding current before the triac turns off, 0 for at once',
    otherwise: DIMMER_DEFAULTS.turnOffTime_us,
  }),
  onVoltage_V: quantity('V', 0, 5, { is: 'On-drop of the triac, 0 for none', otherwise: DIMMER_DEFAULTS.onVoltage_V }),
  onResistance_Ohm: quantity('Ohm', 0.001, 10, { is: 'On-resistance of the triac', otherwise: DIMMER_DEFAULTS.onResistance_Ohm }),
  wiring: choice(['two-wire', 'three-wire'], {
    is: 'Two-wire: the timing current flows through the lamps; three-wire: the dimmer has a neutral of its own',
    otherwise: DIMMER_DEFAULTS.wiring,
  }),
  interferenceCapacitance_nF: quantity('nF', 0, 10_000, {
    is: "Capacitor across the dimmer's terminals, on the mains side of the choke, 0 for none",
    otherwise: DIMMER_DEFAULTS.interferenceCapacitance_nF,
  }),
};

const currentFields = {
  latchingCurrent_mA: triacCurrentField('latching current', 'Current the triac must reach to stay on after the gate pulse.'),
  holdingCurrent_mA: triacCurrentField('holding current', 'Current below which the triac turns off. Never above the latching current.'),
};

/** A dimmer as it is asked about. */
export const askedDimmer = withRule(
  z.strictObject({
    ...currentFields,
    ...z.strictObject(plainFields).partial().shape,
    choke: z.strictObject(chokeFields).partial().optional().describe('Interference choke in series with the triac.'),
    snubber: snubber.nullable().optional().describe('R-C across the triac, or null for none.'),
    ratings: askedRatings.optional().describe('What the maker states; null or absent: not checked.'),
    drive: z
      .discriminatedUnion('kind', [askedDiac, askedTimed])
      .optional()
      .describe(`What fires the gate. ${defaultText(DRIVE_KIND_DEFAULT)}`),
  }),
  reportHoldingAboveLatching,
);

/** A dimmer as it was judged. */
export const judgedDimmer = z.object({
  ...currentFields,
  ...plainFields,
  choke: z.object(chokeFields),
  snubber: snubber.nullable(),
  ratings: z.object(ratingsFields),
  drive: z.discriminatedUnion('kind', [
    z.object({ kind: diacKind, ...diacFields, secondSection }),
    z.object({ kind: timedKind, ...timedFields }),
  ]),
});

/** The dump of the timing capacitor must drive a current into the gate: the breakover is above what diac and gate keep for themselves. */
function reportPowerlessDump(sent: unknown, report: Report): void {
  const residual = numberAt(sent, 'residual_V') ?? DIAC_DEFAULTS.residual_V.at230;
  const gate = numberAt(sent, 'gateVoltage_V') ?? DIAC_DEFAULTS.gateVoltage_V.at230;
  for (const polarity of POLARITIES) {
    const breakover = readPolarity(valueAt(sent, 'breakover_V') ?? DIAC_DEFAULTS.breakover_V.at230, polarity)?.maximum;
    if (breakover === undefined || residual + gate < breakover) continue;
    report(
      ['residual_V'],
      `with gateVoltage_V (${gate}) must stay below breakover_V (${breakover}): otherwise nothing is left to fire the gate`,
    );
    return;
  }
}

/** The diac stays on after it has broken over: what then flows is above its holding current, or it would turn off and break over without end. */
function reportDiacThatLetsGo(sent: unknown, report: Report): void {
  const given = (field: keyof typeof DIAC_OF_ONE_VALUE): number => numberAt(sent, field) ?? DIAC_OF_ONE_VALUE[field].at230;
  // a section without a capacitor is a resistor in series with the diac
  const bare = numberAt(sent, 'secondSection', 'capacitance_nF') === 0 ? (numberAt(sent, 'secondSection', 'resistance_kOhm') ?? 0) : 0;
  const resistance = given('diacResistance_Ohm') + given('gateResistance_Ohm') + 1e3 * bare;
  for (const polarity of POLARITIES) {
    const breakover = readPolarity(valueAt(sent, 'breakover_V') ?? DIAC_DEFAULTS.breakover_V.at230, polarity)?.maximum;
    const voltage = (breakover ?? 0) - given('residual_V') - given('gateVoltage_V');
    const flows = (1e3 * voltage) / resistance;
    // with nothing to flow at all another rule has spoken
    if (!(flows > 0) || given('diacHoldingCurrent_mA') < flows) continue;
    report(
      ['diacHoldingCurrent_mA'],
      `must be below the current that flows when the diac has broken over, ${shortest(flows)} mA (${shortest(voltage)} V left over ${shortest(resistance)} Ohm): otherwise it turns off at once and cannot fire the gate`,
    );
    return;
  }
}

function reportTimingOutOfOrder(sent: unknown, report: Report): void {
  const full = numberAt(sent, 'firingAngleFull_deg') ?? TIMED_DEFAULTS.firingAngleFull_deg.at230;
  const low = numberAt(sent, 'firingAngleLow_deg') ?? TIMED_DEFAULTS.firingAngleLow_deg.at230;
  if (full >= low) report(['firingAngleFull_deg'], `must be below firingAngleLow_deg (${low}): the brighter dial fires earlier`);
  const pulse = numberAt(sent, 'gatePulse_us') ?? TIMED_DEFAULTS.gatePulse_us.at230;
  const spacing = numberAt(sent, 'pulseSpacing_us') ?? TIMED_DEFAULTS.pulseSpacing_us.at230;
  if (valueAt(sent, 'pulses') === 'train' && spacing <= pulse) {
    report(['pulseSpacing_us'], `must be above gatePulse_us (${pulse}): otherwise the pulses run into each other; "held" says that`);
  }
}

function reportRatingsOutOfOrder(sent: unknown, report: Report): void {
  for (const [lower, upper] of [
    ['minimumLoad_W', 'maximumLoad_W'],
    ['maximumCurrent_A', 'maximumPeakCurrent_A'],
  ] as const) {
    const least = numberAt(sent, lower);
    const most = numberAt(sent, upper);
    if (least !== undefined && most !== undefined && least > most) report([lower], `must not be above ${upper} (${most})`);
  }
}
