/**
 * Refuses what cannot be simulated: numbers that are not finite or not positive where they must be, currents and tables in the wrong
 * order. Ranges that only guard against typing errors are the caller's; these are the ones the mathematics needs.
 */

import type { Lamp, Pairing, PerPolarity, SeriesRC } from './pairing.ts';
import type { JudgeOptions } from './verdict.ts';

export interface Issue {
  readonly path: string;
  readonly message: string;
}

class Checks {
  readonly issues: Issue[] = [];

  say(path: string, message: string): void {
    this.issues.push({ path, message });
  }

  positive(path: string, value: number): void {
    if (!(Number.isFinite(value) && value > 0)) this.say(path, `must be a finite number above 0, not ${value}`);
  }

  notNegative(path: string, value: number): void {
    if (!(Number.isFinite(value) && value >= 0)) this.say(path, `must be a finite number, 0 or more, not ${value}`);
  }

  both(path: string, p: PerPolarity): void {
    this.positive(`${path}.positive`, p.positive);
    this.positive(`${path}.negative`, p.negative);
  }

  series(path: string, branch: SeriesRC | null): void {
    if (branch === null) return;
    this.notNegative(`${path}.resistance`, branch.resistance);
    this.notNegative(`${path}.capacitance`, branch.capacitance);
  }
}

function checkLamp(c: Checks, path: string, lamp: Lamp): void {
  const { input, load } = lamp;
  c.notNegative(`${path}.input.seriesResistance`, input.seriesResistance);
  c.notNegative(`${path}.input.seriesCapacitance`, input.seriesCapacitance);
  c.notNegative(`${path}.input.inductance`, input.inductance);
  if (input.inductorLoss !== null) c.positive(`${path}.input.inductorLoss`, input.inductorLoss);
  c.notNegative(`${path}.input.capacitance`, input.capacitance);
  c.series(`${path}.input.damper`, input.damper);
  if (input.bleeder?.kind === 'active') {
    c.positive(`${path}.input.bleeder.current`, input.bleeder.current);
    c.positive(`${path}.input.bleeder.below`, input.bleeder.below);
  } else if (input.bleeder !== null) {
    c.positive(`${path}.input.bleeder.resistance`, input.bleeder.resistance);
    if (input.bleeder.kind === 'resistor-capacitor') c.notNegative(`${path}.input.bleeder.capacitance`, input.bleeder.capacitance);
  }
  if (load.kind === 'resistive') c.positive(`${path}.load.resistance`, load.resistance);
  if (load.kind === 'reservoir') {
    c.positive(`${path}.load.capacitance`, load.capacitance);
    c.notNegative(`${path}.load.surgeResistance`, load.surgeResistance);
    c.positive(`${path}.load.minimumVoltage`, load.minimumVoltage);
    const drain = load.drain.kind === 'power' ? load.drain.power : load.drain.current;
    c.positive(`${path}.load.drain.${load.drain.kind}`, drain);
  }
  if (load.kind === 'iv-table') {
    if (load.points.length < 2 || load.points.length > 64) c.say(`${path}.load.points`, 'must hold 2 to 64 points');
    load.points.forEach((p, k) => {
      c.notNegative(`${path}.load.points[${k}].voltage`, p.voltage);
      c.notNegative(`${path}.load.points[${k}].current`, p.current);
      const before = load.points[k - 1];
      if (before !== undefined && !(p.voltage > before.voltage)) {
        c.say(`${path}.load.points[${k}].voltage`, `must be above the point before it (${before.voltage} V)`);
      }
    });
  }
}

export function checkPairing(pairing: Pairing): Issue[] {
  const c = new Checks();
  const { mains, dimmer, lamps, addedLoad } = pairing;
  c.positive('mains.voltage', mains.voltage);
  c.positive('mains.frequency', mains.frequency);
  c.notNegative('mains.sourceResistance', mains.sourceResistance);
  c.both('dimmer.latchingCurrent', dimmer.latchingCurrent);
  c.both('dimmer.holdingCurrent', dimmer.holdingCurrent);
  for (const sign of ['positive', 'negative'] as const) {
    if (dimmer.holdingCurrent[sign] > dimmer.latchingCurrent[sign]) {
      c.say(`dimmer.holdingCurrent.${sign}`, 'must not be above the latching current: no triac holds at more than it latches');
    }
  }
  c.notNegative('dimmer.turnOffTime', dimmer.turnOffTime);
  c.notNegative('dimmer.onVoltage', dimmer.onVoltage);
  c.notNegative('dimmer.onResistance', dimmer.onResistance);
  c.notNegative('dimmer.choke.inductance', dimmer.choke.inductance);
  c.notNegative('dimmer.choke.resistance', dimmer.choke.resistance);
  if (dimmer.choke.lossResistance !== null) c.positive('dimmer.choke.lossResistance', dimmer.choke.lossResistance);
  c.series('dimmer.snubber', dimmer.snubber);
  c.notNegative('dimmer.interferenceCapacitance', dimmer.interferenceCapacitance);
  const { drive } = dimmer;
  if (drive.kind === 'diac') {
    for (const key of [
      'fixedResistance',
      'capacitance',
      'diacResistance',
      'diacHoldingCurrent',
      'gateResistance',
      'gateThreshold',
    ] as const) {
      c.positive(`dimmer.drive.${key}`, drive[key]);
    }
    for (const key of ['potentiometer', 'residualVoltage', 'gateVoltage'] as const) c.notNegative(`dimmer.drive.${key}`, drive[key]);
    c.both('dimmer.drive.breakover', drive.breakover);
    if (!(drive.residualVoltage + drive.gateVoltage < Math.min(drive.breakover.positive, drive.breakover.negative))) {
      c.say('dimmer.drive.residualVoltage', 'with the gate voltage must stay below the breakover voltage, or the diac could not conduct');
    }
    const least = Math.min(drive.breakover.positive, drive.breakover.negative) - drive.residualVoltage - drive.gateVoltage;
    const dump = least / (drive.diacResistance + drive.gateResistance);
    // it would turn off as soon as it has broken over, and break over again at once
    if (dump > 0 && dump <= drive.diacHoldingCurrent) {
      c.say(
        'dimmer.drive.diacHoldingCurrent',
        `must be below the current that flows at breakover (${dump} A), or the diac could not stay on`,
      );
    }
    if (drive.secondSection !== null) {
      c.positive('dimmer.drive.secondSection.resistance', drive.secondSection.resistance);
      c.positive('dimmer.drive.secondSection.capacitance', drive.secondSection.capacitance);
    }
  } else {
    for (const key of ['firingAngleFull', 'firingAngleLow'] as const) {
      c.notNegative(`dimmer.drive.${key}`, drive[key]);
      if (drive[key] >= 180) c.say(`dimmer.drive.${key}`, 'must be below 180 degrees');
    }
    c.positive('dimmer.drive.gatePulse', drive.gatePulse);
    if (drive.pulses === 'train' && !(drive.pulseSpacing > drive.gatePulse)) {
      c.say('dimmer.drive.pulseSpacing', 'must be longer than the gate pulse');
    }
  }
  if (lamps.length === 0) c.say('lamps', 'must hold at least one lamp');
  lamps.forEach((group, k) => {
    if (!(Number.isInteger(group.count) && group.count >= 1)) c.say(`lamps[${k}].count`, 'must be a whole number, 1 or more');
    checkLamp(c, `lamps[${k}].lamp`, group.lamp);
  });
  if (addedLoad !== null) {
    c.positive('addedLoad.resistance', addedLoad.resistance);
    if (addedLoad.kind === 'resistor-capacitor') c.notNegative('addedLoad.capacitance', addedLoad.capacitance);
  }
  return c.issues;
}

export function checkDialPositions(positions: readonly number[]): Issue[] {
  const c = new Checks();
  if (positions.length === 0 || positions.length > 101) c.say('dialPositions', 'must hold 1 to 101 positions');
  positions.forEach((p, k) => {
    if (!(p >= 0 && p <= 100)) c.say(`dialPositions[${k}]`, `must lie within 0 to 100 %, not ${p}`);
    const before = positions[k - 1];
    if (before !== undefined && !(p > before)) c.say(`dialPositions[${k}]`, `must be above the position before it (${before} %)`);
  });
  return c.issues;
}

export function checkOptions(options: JudgeOptions): Issue[] {
  const c = new Checks();
  if (!(options.dropOutAngle > 0 && options.dropOutAngle <= 180)) {
    c.say('dropOutAngle', `must lie within 0 to 180 degrees, not ${options.dropOutAngle}`);
  }
  return [...checkDialPositions(options.dialPositions), ...c.issues];
}
