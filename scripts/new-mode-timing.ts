/**
 * Times the building of modes inside a run, from outside: the engine's own methods, each with a clock around it that only runs where
 * something is built. Setting up a configuration that the circuit has not been in before (nodal analysis, once for all dial positions) is taken
 * off again.
 */
import { ConfigurationMap } from '../model/engine/configuration-map.ts';
import { ModeShelf } from '../model/engine/mode.ts';

/** ms that `run` spent building modes and the ways between them */
export function timeNewModes(run: () => void): number {
  const { passage, mode } = ModeShelf.prototype;
  const { place, beyond } = ConfigurationMap.prototype;
  const spent = { building: 0, mapping: 0 };
  // placing a configuration is part of looking beyond one
  let isMapping = false;
  const mapping = <T>(act: () => T): T => {
    if (isMapping) return act();
    isMapping = true;
    const began = performance.now();
    try {
      return act();
    } finally {
      spent.mapping += performance.now() - began;
      isMapping = false;
    }
  };
  const building = <T>(act: () => T): T => {
    const began = performance.now();
    try {
      return act();
    } finally {
      spent.building += performance.now() - began;
    }
  };
  ModeShelf.prototype.passage = function (from, way) {
    return from.passages[way] ?? building(() => passage.call(this, from, way));
  };
  ModeShelf.prototype.mode = function (configuration) {
    return building(() => mode.call(this, configuration));
  };
  ConfigurationMap.prototype.place = function (configuration) {
    return mapping(() => place.call(this, configuration));
  };
  ConfigurationMap.prototype.beyond = function (from, way) {
    return mapping(() => beyond.call(this, from, way));
  };
  try {
    run();
  } finally {
    Object.assign(ModeShelf.prototype, { passage, mode });
    Object.assign(ConfigurationMap.prototype, { place, beyond });
  }
  return spent.building - spent.mapping;
}
