/** Converts a fit, and the lamp that came out of it, from SI to the wire's units; the lamp is one that a pairing can hold. */
import type { Lamp, Load, ProfileFit, ProfileMeans } from '../../model/index.ts';
import type { FoundFit } from '../schemas/found-lamp.ts';
import type { JudgedCircuitLamp } from '../schemas/lamp.ts';
import { percentOrNull, shown } from './shown-figures.ts';

export function fitToWire(fit: ProfileFit): Omit<FoundFit, 'path'> {
  return {
    form: fit.form,
    residual_pct: shown(100 * fit.residual),
    otherResidual_pct: percentOrNull(fit.otherResidual),
    recorded: meansToWire(fit.recorded),
    fitted: meansToWire(fit.fitted),
    lamp: fittedLampToWire(fit.lamp),
    taken: fit.taken.map(({ path, basis }) => ({ path: TAKEN_PATHS[path] ?? path, basis })),
  };
}

/** places in a lamp that a fit can take from elsewhere, under the wire's names */
export const TAKEN_PATHS: { readonly [path: string]: string } = {
  'input.seriesResistance': 'input.seriesResistance_Ohm',
  'load.minimumVoltage': 'load.minimumVoltage_V',
  'load.drain.kind': 'load.power_W',
};

function meansToWire({ rmsCurrent, power, powerFactor }: ProfileMeans): FoundFit['recorded'] {
  return { rmsCurrent_mA: shown(rmsCurrent * 1e3), power_W: shown(power), powerFactor: shown(powerFactor) };
}

/** A fit puts neither an inductor nor a damper nor a bleeder into the input: no undimmed record would show them. */
export function fittedLampToWire({ ratedPower, input, load }: Lamp): JudgedCircuitLamp {
  return {
    ratedPower_W: ratedPower,
    ratedVoltage_V: null,
    load: loadToWire(load),
    input: {
      seriesResistance_Ohm: shown(input.seriesResistance),
      seriesCapacitance_nF: shown(input.seriesCapacitance * 1e9),
      inductance_mH: 0,
      inductorLoss_kOhm: null,
      capacitance_nF: shown(input.capacitance * 1e9),
      damper: null,
      bleeder: null,
    },
  };
}

function loadToWire(load: Load): JudgedCircuitLamp['load'] {
  switch (load.kind) {
    case 'resistive':
      return { kind: 'resistive', resistance_Ohm: shown(load.resistance) };
    case 'iv-table':
      return { kind: 'iv-table', points: load.points.map((p) => ({ voltage_V: shown(p.voltage), current_mA: shown(p.current * 1e3) })) };
    case 'reservoir':
      return {
        kind: 'reservoir',
        capacitance_uF: shown(load.capacitance * 1e6),
        surgeResistance_Ohm: shown(load.surgeResistance),
        ...(load.drain.kind === 'power' ? { power_W: shown(load.drain.power) } : { current_mA: shown(load.drain.current * 1e3) }),
        minimumVoltage_V: shown(load.minimumVoltage),
      };
  }
}
