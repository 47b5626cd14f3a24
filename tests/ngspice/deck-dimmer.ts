/**
 * The dimmer's part of the deck. Currents and voltages are ordinary elements; what the triac and the diac remember (latched or not,
 * broken over or not) is event-driven logic, which cannot flip inside the solver's iterations. Detectors turn a current or voltage
 * that passes its limit into a bit, bits drive conductances over 10 ns.
 */
import type { DiacDrive, Dimmer, Pairing } from '../../model/pairing.ts';
import { beyond, detector, inductorOrShort, number, oddPiecewise, piecewise, resistorOrShort, seriesRC, within } from './deck-element.ts';
import { gatePulses } from './deck-gate-pulses.ts';

export function dimmer(pairing: Pairing, dial: number, halfCycles: number): string[] {
  const { dimmer, mains } = pairing;
  const { drive } = dimmer;
  return [
    ...inductorOrShort('choke', 's', 'dc', dimmer.choke.inductance, dimmer.choke.lossResistance),
    resistorOrShort('winding', 'dc', 'd', dimmer.choke.resistance),
    ...(dimmer.interferenceCapacitance > 0 ? [`cinterference s a ${number(dimmer.interferenceCapacitance)}`] : []),
    ...(dimmer.snubber === null ? [] : seriesRC('snubber', 'd', 'a', dimmer.snubber.resistance, dimmer.snubber.capacitance)),
    ...triac(dimmer),
    ...(drive.kind === 'diac' ? diacDrive(drive, dimmer.wiring, dial) : gatePulses(drive, mains.frequency, dial, halfCycles)),
    '.model todigital adc_bridge(in_low=0.5 in_high=0.5 rise_delay=1n fall_delay=1n)',
    '.model toanalog dac_bridge(out_low=0 out_high=1 out_undef=0 t_rise=10n t_fall=10n)',
    '.model both d_and(rise_delay=1n fall_delay=1n)',
    '.model either d_or(rise_delay=1n fall_delay=1n)',
    '.model opposite d_inverter(rise_delay=1n fall_delay=1n)',
  ];
}

/** on = gated or latched; latched is set above the latching current and cleared when `under` has held for the turn-off time. */
function triac(dimmer: Dimmer): string[] {
  const { holdingCurrent, latchingCurrent, onVoltage, onResistance } = dimmer;
  const low = Math.min(holdingCurrent.positive, holdingCurrent.negative);
  const knee = onVoltage + onResistance * low;
  const resistance = Math.max(onResistance, 1e-3);
  return [
    'vtriac d dt 0',
    `btriac dt a i=v(on)*${oddPiecewise('v(dt,a)', [
      [knee, low],
      [knee + 1000, low + 1000 / resistance],
    ])}`,
    ...detector('over', beyond('i(vtriac)', latchingCurrent.positive, latchingCurrent.negative, 1e-4 * latchingCurrent.positive)),
    ...detector('under', within('i(vtriac)', holdingCurrent.positive, holdingCurrent.negative, 1e-4 * holdingCurrent.positive)),
    ...turnOffTimer(dimmer.turnOffTime),
    'akeep lapsed keep opposite',
    'astay [latched keep] stay both',
    'alatch [over stay] latched either',
    'aon [gated latched] ond either',
    'aonout [ond] [on] toanalog',
    'ron on 0 1k',
  ];
}

/** A capacitor that fills to 1 V in the turn-off time while the current is under the holding current and empties at once when it is not.
 * (A gate's own delay would do, but ngspice keeps events of a step that it then takes back.) */
function turnOffTimer(turnOffTime: number): string[] {
  if (turnOffTime === 0) return ['.model same d_buffer(rise_delay=1n fall_delay=1n)', 'alapsed under lapsed same'];
  const filling = piecewise('v(timer)', [
    [-1, 1],
    [1.4, 1],
    [1.5, 0],
    [3, -15],
  ]);
  return [
    'ctimer timer 0 10n',
    `btimer 0 timer i=(v(underx) > 0.5) ? (${number(10e-9 / turnOffTime)}*${filling}) : (-v(timer))`,
    ...detector('lapsed', beyond('v(timer)', 1, 1, 5e-4)),
  ];
}

/** The timing network and diac between a reference node (the lamp line, or the live side with a neutral) and its feed. */
function diacDrive(drive: DiacDrive, wiring: Dimmer['wiring'], dial: number): string[] {
  const [feed, reference, sign] = wiring === 'two-wire' ? ['d', 'a', ''] : ['0', 'd', '-'];
  const diacNode = drive.secondSection === null ? 't' : 't2';
  const drop = drive.residualVoltage + drive.gateVoltage;
  const slope = 1 / (drive.diacResistance + drive.gateResistance);
  const { positive, negative } = drive.breakover;
  const timing = 'v(vct)';
  return [
    resistorOrShort('timing', feed as string, 't', drive.fixedResistance + drive.potentiometer * (1 - dial / 100)),
    `ctiming t ${reference} ${number(drive.capacitance)}`,
    ...(drive.secondSection === null
      ? []
      : [
          resistorOrShort('second', 't', 't2', drive.secondSection.resistance),
          `csecond t2 ${reference} ${number(drive.secondSection.capacitance)}`,
        ]),
    `evct vct 0 ${sign === '' ? `${diacNode} ${reference}` : `${reference} ${diacNode}`} 1`,
    `vdiac ${diacNode} dd 0`,
    `bdiac dd ${reference} i=v(diac)*${oddPiecewise(`v(dd,${reference})`, [
      [drop, 0],
      [drop + 1000, 1000 * slope],
    ])}`,
    ...detector('broken', beyond(timing, positive, negative, 5e-4)),
    // the dump has pulled the capacitor clear of the breakover voltage before a missing current may end it
    ...detector('dumped', within(timing, positive - 0.5, negative - 0.5, 0.1)),
    ...detector('starved', within('i(vdiac)', drive.diacHoldingCurrent, drive.diacHoldingCurrent, 1e-4 * drive.diacHoldingCurrent)),
    'aend [dumped starved] diacend both',
    'adiackeep diacend diackeep opposite',
    'adiacstay [diacd diackeep] diacstay both',
    'adiac [broken diacstay] diacd either',
    'adiacout [diacd] [diac] toanalog',
    'rdiac diac 0 1k',
    ...detector('gated', beyond('i(vdiac)', drive.gateThreshold, drive.gateThreshold, 1e-4 * drive.gateThreshold)),
  ];
}
