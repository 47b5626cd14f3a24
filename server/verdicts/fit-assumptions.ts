/**
 * The assumptions of a verdict with what its fits rest on: a value that a fit used is listed as it was used, and one that it had no use
 * for is not listed.
 */
import type { FoundLamp } from '../simulation/asked-circuit.ts';
import { fittedLampToWire, TAKEN_PATHS } from './lamp-to-wire.ts';
import type { Assumption } from './pairing-completion.ts';

export function withFitAssumptions(assumptions: readonly Assumption[], found: readonly FoundLamp[]): readonly Assumption[] {
  return found.reduce((listed, lamp) => (lamp.known === 'record' ? withFit(listed, lamp) : listed), assumptions);
}

function withFit(assumptions: readonly Assumption[], found: Extract<FoundLamp, { known: 'record' }>): readonly Assumption[] {
  const lampPath = `lamps[${found.group}].lamp`;
  const { load, input } = fittedLampToWire(found.lamp);
  const used: { readonly [path: string]: Assumption['value'] | undefined } = {
    'input.seriesResistance_Ohm': input.seriesResistance_Ohm,
    'load.minimumVoltage_V': load.kind === 'reservoir' ? load.minimumVoltage_V : undefined,
    'load.power_W': load.kind === 'reservoir' ? 'constant' : undefined,
  };
  const basisOf = new Map(found.taken.map(({ path, basis }) => [TAKEN_PATHS[path] ?? path, basis]));
  const kept = assumptions.flatMap((assumption): readonly Assumption[] => {
    const own = assumption.path.slice(lampPath.length + 1);
    if (!assumption.path.startsWith(`${lampPath}.`) || !(own in used)) return [assumption];
    const value = used[own];
    return value === undefined ? [] : [{ path: assumption.path, value, basis: basisOf.get(own) ?? assumption.basis }];
  });
  const drain = basisOf.get('load.power_W');
  return drain === undefined ? kept : [...kept, { path: `${lampPath}.load.power_W`, value: 'constant', basis: drain }];
}
