/**
 * Bad questions as data: how each is broken, the path the answer must name, and a part of what it must say would be right. Every case
 * starts from a pairing that is valid.
 */
import { examplePairing, type Loose } from '../support/server-pairings.ts';

export interface BadInputCase {
  readonly title: string;
  readonly breakIt: (pairing: Loose) => void;
  readonly path: string;
  readonly says: RegExp;
}

const LOAD = 'lamps[0].lamp.load';
const load = (pairing: Loose, value: Loose): void => {
  pairing.lamps[0].lamp.load = value;
};
const drive = (pairing: Loose, value: Loose): void => {
  pairing.dimmer.drive = value;
};
const phaseTable = (phases: readonly number[]): Loose => ({
  kind: 'phase-table',
  voltage_V: 230,
  frequency_Hz: 50,
  points: phases.map((phase_deg) => ({ phase_deg, current_mA: 1 })),
});
const steps = (count: number, step: number): readonly number[] => Array.from({ length: count }, (_, index) => index * step);

export const BAD_INPUT_CASES: readonly BadInputCase[] = [
  // fields
  {
    title: 'an unknown field at the top',
    breakIt: (p) => {
      p.lamp = {};
    },
    path: 'lamp',
    says: /not a field here; .*lamps/,
  },
  {
    title: 'an unknown field inside',
    breakIt: (p) => {
      p.dimmer.latchingCurrent = 60;
    },
    path: 'dimmer.latchingCurrent',
    says: /latchingCurrent_mA/,
  },
  {
    title: 'a unit that does not fit',
    breakIt: (p) => {
      p.lamps[0].lamp.input.capacitance_uF = 1;
    },
    path: 'lamps[0].lamp.input.capacitance_uF',
    says: /capacitance_nF/,
  },
  {
    title: 'a dimmer both by its id and in full',
    breakIt: (p) => {
      p.dimmer.dimmerId = 'hall';
    },
    path: 'dimmer.dimmerId',
    says: /not a field/,
  },
  {
    title: 'an id that no entry can have',
    breakIt: (p) => {
      p.dimmer = { dimmerId: 'hall 1' };
    },
    path: 'dimmer.dimmerId',
    says: /letters, digits/,
  },
  {
    title: 'a lamp by its id without a count',
    breakIt: (p) => {
      p.lamps = [{ lampId: 'candle' }];
    },
    path: 'lamps[0].count',
    says: /is missing/,
  },
  {
    title: 'a missing mains',
    breakIt: (p) => {
      delete p.mains;
    },
    path: 'mains',
    says: /is missing: it must be an object with voltage_V/,
  },
  {
    title: 'a missing holding current',
    breakIt: (p) => {
      delete p.dimmer.holdingCurrent_mA;
    },
    path: 'dimmer.holdingCurrent_mA',
    says: /is missing.*number from 0.1 to 1000 \(mA\), or an object with typical/,
  },
  {
    title: 'a missing load',
    breakIt: (p) => {
      delete p.lamps[0].lamp.load;
    },
    path: LOAD,
    says: /is missing/,
  },
  // types
  {
    title: 'text for a number',
    breakIt: (p) => {
      p.mains.voltage_V = '230';
    },
    path: 'mains.voltage_V',
    says: /number from 85 to 265 \(V\)/,
  },
  {
    title: 'null for a number',
    breakIt: (p) => {
      p.mains.frequency_Hz = null;
    },
    path: 'mains.frequency_Hz',
    says: /number from 45 to 65/,
  },
  {
    title: 'a list for an object',
    breakIt: (p) => {
      p.dimmer = [];
    },
    path: 'dimmer',
    says: /object with latchingCurrent_mA/,
  },
  {
    title: 'an object for a list',
    breakIt: (p) => {
      p.lamps = {};
    },
    path: 'lamps',
    says: /list of 1 to 12 lamp groups/,
  },
  {
    title: 'text for a current',
    breakIt: (p) => {
      p.dimmer.latchingCurrent_mA = 'sixty';
    },
    path: 'dimmer.latchingCurrent_mA',
    says: /number from 0.1 to 1000 \(mA\), or/,
  },
  {
    title: 'a wiring that is not one',
    breakIt: (p) => {
      p.dimmer.wiring = 'four-wire';
    },
    path: 'dimmer.wiring',
    says: /"two-wire", "three-wire"/,
  },
  {
    title: 'a load of no known kind',
    breakIt: (p) => load(p, { kind: 'drawing', class: 'linear-string' }),
    path: `${LOAD}.kind`,
    says: /"resistive", "iv-table", "reservoir", "phase-table", "class"/,
  },
  { title: 'a drive without a kind', breakIt: (p) => drive(p, { residual_V: 10 }), path: 'dimmer.drive.kind', says: /"diac", "timed"/ },
  {
    title: 'a field of another drive',
    breakIt: (p) => drive(p, { kind: 'timed', residual_V: 10 }),
    path: 'dimmer.drive.residual_V',
    says: /firingAngleFull_deg/,
  },
  // numbers out of all reason
  {
    title: 'a negative capacitance',
    breakIt: (p) => {
      p.lamps[0].lamp.input.capacitance_nF = -47;
    },
    path: 'lamps[0].lamp.input.capacitance_nF',
    says: /0 to 10000 \(nF\)/,
  },
  {
    title: 'a negative choke',
    breakIt: (p) => {
      p.dimmer.choke = { inductance_mH: -1 };
    },
    path: 'dimmer.choke.inductance_mH',
    says: /0 to 100 \(mH\)/,
  },
  {
    title: 'a choke of a henry',
    breakIt: (p) => {
      p.dimmer.choke = { inductance_mH: 1000 };
    },
    path: 'dimmer.choke.inductance_mH',
    says: /0 to 100/,
  },
  {
    title: 'a snubber without resistance',
    breakIt: (p) => {
      p.dimmer.snubber = { resistance_Ohm: 0, capacitance_nF: 33 };
    },
    path: 'dimmer.snubber.resistance_Ohm',
    says: /1 to 100000 \(Ohm\)/,
  },
  {
    title: 'a mains of 400 V',
    breakIt: (p) => {
      p.mains.voltage_V = 400;
    },
    path: 'mains.voltage_V',
    says: /85 to 265/,
  },
  {
    title: 'a latching current of zero',
    breakIt: (p) => {
      p.dimmer.latchingCurrent_mA = 0;
    },
    path: 'dimmer.latchingCurrent_mA',
    says: /0.1 to 1000/,
  },
  {
    title: 'a timing capacitor of zero',
    breakIt: (p) => drive(p, { kind: 'diac', capacitance_nF: 0 }),
    path: 'dimmer.drive.capacitance_nF',
    says: /1 to 10000/,
  },
  // values at odds
  {
    title: 'a holding current above the latching current',
    breakIt: (p) => {
      p.dimmer.holdingCurrent_mA = 61;
    },
    path: 'dimmer.holdingCurrent_mA',
    says: /not be above the latching current \(60 mA\)/,
  },
  {
    title: 'that in one polarity alone',
    breakIt: (p) => {
      p.dimmer.latchingCurrent_mA = { positive: 60, negative: 30 };
    },
    path: 'dimmer.holdingCurrent_mA',
    says: /\(30 mA\)/,
  },
  {
    title: 'that at the typical values alone',
    breakIt: (p) => {
      p.dimmer.latchingCurrent_mA = { typical: 20, maximum: 60 };
      p.dimmer.holdingCurrent_mA = { typical: 25, maximum: 35 };
    },
    path: 'dimmer.holdingCurrent_mA',
    says: /typical \(20 mA\)/,
  },
  {
    title: 'a typical value above its maximum',
    breakIt: (p) => {
      p.dimmer.latchingCurrent_mA = { typical: 61, maximum: 60 };
    },
    path: 'dimmer.latchingCurrent_mA.typical',
    says: /maximum \(60 mA\)/,
  },
  {
    title: 'one polarity without the other',
    breakIt: (p) => {
      p.dimmer.latchingCurrent_mA = { positive: 60 };
    },
    path: 'dimmer.latchingCurrent_mA.negative',
    says: /is missing/,
  },
  {
    title: 'a diac that keeps more than it breaks over at',
    breakIt: (p) => drive(p, { kind: 'diac', residual_V: 40 }),
    path: 'dimmer.drive.residual_V',
    says: /below breakover_V \(32\)/,
  },
  {
    title: 'that in one polarity',
    breakIt: (p) => drive(p, { kind: 'diac', residual_V: 20, breakover_V: { positive: 32, negative: 20 } }),
    path: 'dimmer.drive.residual_V',
    says: /breakover_V \(20\)/,
  },
  {
    title: 'a diac that turns off at a higher current than its own dump drives',
    breakIt: (p) => drive(p, { kind: 'diac', gateResistance_Ohm: 4700 }),
    path: 'dimmer.drive.diacHoldingCurrent_mA',
    says: /below the current that flows when the diac has broken over, 4\.06 mA \(19\.1 V left over 4710 Ohm\)/,
  },
  {
    title: 'that in the polarity that breaks over lower',
    breakIt: (p) => drive(p, { kind: 'diac', breakover_V: { positive: 32, negative: 14 }, diacHoldingCurrent_mA: 12 }),
    path: 'dimmer.drive.diacHoldingCurrent_mA',
    says: /10 mA \(1\.1 V left over 110 Ohm\)/,
  },
  {
    title: 'that behind a timing section without a capacitor',
    breakIt: (p) => drive(p, { kind: 'diac', secondSection: { resistance_kOhm: 10, capacitance_nF: 0 } }),
    path: 'dimmer.drive.diacHoldingCurrent_mA',
    says: /1\.89 mA \(19\.1 V left over 10100 Ohm\)/,
  },
  {
    title: 'a full dial that fires later than a low one',
    breakIt: (p) => drive(p, { kind: 'timed', firingAngleFull_deg: 151 }),
    path: 'dimmer.drive.firingAngleFull_deg',
    says: /below firingAngleLow_deg \(150\)/,
  },
  {
    title: 'a train whose pulses run into each other',
    breakIt: (p) => drive(p, { kind: 'timed', pulses: 'train', gatePulse_us: 600 }),
    path: 'dimmer.drive.pulseSpacing_us',
    says: /above gatePulse_us \(600\)/,
  },
  {
    title: 'a minimum load above the maximum load',
    breakIt: (p) => {
      p.dimmer.ratings = { minimumLoad_W: 100, maximumLoad_W: 50 };
    },
    path: 'dimmer.ratings.minimumLoad_W',
    says: /maximumLoad_W \(50\)/,
  },
  // lamps
  {
    title: 'no lamps',
    breakIt: (p) => {
      p.lamps = [];
    },
    path: 'lamps',
    says: /1 to 12/,
  },
  {
    title: 'thirteen groups of lamps',
    breakIt: (p) => {
      p.lamps = Array(13).fill(p.lamps[0]);
    },
    path: 'lamps',
    says: /1 to 12/,
  },
  {
    title: 'no lamp in a group',
    breakIt: (p) => {
      p.lamps[0].count = 0;
    },
    path: 'lamps[0].count',
    says: /whole number from 1 to 500/,
  },
  {
    title: 'ten thousand lamps',
    breakIt: (p) => {
      p.lamps[0].count = 10_000;
    },
    path: 'lamps[0].count',
    says: /1 to 500/,
  },
  {
    title: 'half a lamp',
    breakIt: (p) => {
      p.lamps[0].count = 1.5;
    },
    path: 'lamps[0].count',
    says: /whole number/,
  },
  {
    title: 'a resistive lamp of neither resistance nor power',
    breakIt: (p) => {
      p.lamps[0].lamp = { load: { kind: 'resistive' } };
    },
    path: `${LOAD}.resistance_Ohm`,
    says: /ratedPower_W/,
  },
  {
    title: 'a reservoir that nothing drains',
    breakIt: (p) => load(p, { kind: 'reservoir', capacitance_uF: 4.7 }),
    path: `${LOAD}.power_W`,
    says: /power_W or current_mA/,
  },
  {
    title: 'a reservoir drained twice',
    breakIt: (p) => load(p, { kind: 'reservoir', capacitance_uF: 4.7, power_W: 5, current_mA: 5 }),
    path: `${LOAD}.current_mA`,
    says: /one or the other/,
  },
  // tables
  {
    title: 'a curve of one point',
    breakIt: (p) => {
      p.lamps[0].lamp.load.points.length = 1;
    },
    path: `${LOAD}.points`,
    says: /2 to 64 points/,
  },
  {
    title: 'a curve of 65 points',
    breakIt: (p) => {
      p.lamps[0].lamp.load.points = steps(65, 1).map((voltage_V) => ({ voltage_V, current_mA: 1 }));
    },
    path: `${LOAD}.points`,
    says: /2 to 64/,
  },
  {
    title: 'an unsorted curve',
    breakIt: (p) => {
      p.lamps[0].lamp.load.points.reverse();
    },
    path: `${LOAD}.points[1].voltage_V`,
    says: /above the one before it \(325 V\)/,
  },
  {
    title: 'a curve with one voltage twice',
    breakIt: (p) => {
      p.lamps[0].lamp.load.points[1].voltage_V = 0;
    },
    path: `${LOAD}.points[1].voltage_V`,
    says: /without repeats/,
  },
  {
    title: 'a curve with a negative current',
    breakIt: (p) => {
      p.lamps[0].lamp.load.points[1].current_mA = -1;
    },
    path: `${LOAD}.points[1].current_mA`,
    says: /0 to 5000/,
  },
  {
    title: 'a phase table over a quarter-cycle',
    breakIt: (p) => load(p, phaseTable(steps(91, 1))),
    path: `${LOAD}.points`,
    says: /cover a half-cycle: these points span 90 deg/,
  },
  {
    title: 'a phase table with a gap in it that its mean step would hide',
    breakIt: (p) => load(p, phaseTable([...steps(89, 2), 177])),
    path: `${LOAD}.points`,
    says: /these points span 177 deg, 180 are needed/,
  },
  {
    title: 'a class without a rated power',
    breakIt: (p) => {
      p.lamps[0].lamp = { load: { kind: 'class', class: 'linear-string' } };
    },
    path: 'lamps[0].lamp.ratedPower_W',
    says: /is missing: a class says/,
  },
  {
    title: 'an unknown class',
    breakIt: (p) => {
      p.lamps[0].lamp = { ratedPower_W: 8, load: { kind: 'class', class: 'driver' } };
    },
    path: `${LOAD}.class`,
    says: /"reservoir-driver"/,
  },
  {
    title: 'an input beside a class',
    breakIt: (p) => {
      p.lamps[0].lamp.load = { kind: 'class', class: 'linear-string' };
    },
    path: 'lamps[0].lamp.input',
    says: /must be absent/,
  },
  {
    title: 'a power factor of a lamp given by its circuit',
    breakIt: (p) => {
      p.lamps[0].lamp.powerFactor = 0.9;
    },
    path: 'lamps[0].lamp.powerFactor',
    says: /only where the load is a class/,
  },
  {
    title: 'a power factor of 0',
    breakIt: (p) => {
      p.lamps[0].lamp = { ratedPower_W: 8, powerFactor: 0, load: { kind: 'class', class: 'linear-string' } };
    },
    path: 'lamps[0].lamp.powerFactor',
    says: /above 0, up to 1/,
  },
  {
    title: 'an input capacitor beside a phase table, which shows it',
    breakIt: (p) => load(p, phaseTable(steps(180, 1))),
    path: 'lamps[0].lamp.input.capacitance_nF',
    says: /must be absent/,
  },
  {
    title: 'more counts than are judged at once',
    breakIt: (p) => {
      p.options = { lampCount: { from: 1, to: 61 } };
    },
    path: 'options.lampCount.to',
    says: /from 1 \(`from`\) to 60/,
  },
  {
    title: 'a supply band the wrong way round',
    breakIt: (p) => {
      p.options = { supplyBand: { low_pct: 110 } };
    },
    path: 'options.supplyBand.low_pct',
    says: /50 to 100/,
  },
  {
    title: 'a phase table one sample too short',
    breakIt: (p) => load(p, phaseTable(steps(179, 1))),
    path: `${LOAD}.points`,
    says: /span 178 deg/,
  },
  {
    title: 'an unsorted phase table',
    breakIt: (p) => load(p, phaseTable([0, 30, 60, 50, 90, 120, 150, 180])),
    path: `${LOAD}.points[3].phase_deg`,
    says: /above the one before it \(60 deg\)/,
  },
  { title: 'a phase table of seven points', breakIt: (p) => load(p, phaseTable(steps(7, 30))), path: `${LOAD}.points`, says: /8 to 720/ },
  {
    title: 'a phase beyond the cycle',
    breakIt: (p) => load(p, phaseTable(steps(9, 46))),
    path: `${LOAD}.points[8].phase_deg`,
    says: /0 to 360/,
  },
  // options
  {
    title: 'no dial position',
    breakIt: (p) => {
      p.options = { dialPositions_pct: [] };
    },
    path: 'options.dialPositions_pct',
    says: /1 to 101/,
  },
  {
    title: 'too many dial positions',
    breakIt: (p) => {
      p.options = { dialPositions_pct: steps(102, 0.5) };
    },
    path: 'options.dialPositions_pct',
    says: /1 to 101/,
  },
  {
    title: 'unsorted dial positions',
    breakIt: (p) => {
      p.options = { dialPositions_pct: [50, 40] };
    },
    path: 'options.dialPositions_pct[1]',
    says: /above the one before it \(50 %\)/,
  },
  {
    title: 'a dial position twice',
    breakIt: (p) => {
      p.options = { dialPositions_pct: [50, 50] };
    },
    path: 'options.dialPositions_pct[1]',
    says: /without repeats/,
  },
  {
    title: 'a dial position beyond the end',
    breakIt: (p) => {
      p.options = { dialPositions_pct: [101] };
    },
    path: 'options.dialPositions_pct[0]',
    says: /0 to 100/,
  },
  {
    title: 'corners that are not a choice',
    breakIt: (p) => {
      p.options = { corners: 'some' };
    },
    path: 'options.corners',
    says: /"all", "nominal"/,
  },
  {
    title: 'an added load of no kind',
    breakIt: (p) => {
      p.addedLoad = { kind: 'inductor' };
    },
    path: 'addedLoad.kind',
    says: /"resistor", "resistor-capacitor"/,
  },
];

export function broken({ breakIt }: BadInputCase): Loose {
  const pairing = examplePairing();
  breakIt(pairing);
  return pairing;
}
