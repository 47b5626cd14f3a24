/**
 * Assumed values under the names of both sides: on the wire a path ends in the unit of its value, in the model it does not and the value is
 * in SI units.
 */
import { ASSUMABLE_PATHS, type AssumedValue } from '../../model/index.ts';

/** SI value of one such unit */
const UNITS: { readonly [suffix: string]: number } = { V: 1, Ohm: 1, deg: 1, kOhm: 1e3, mA: 1e-3, mH: 1e-3, us: 1e-6, uF: 1e-6, nF: 1e-9 };

const withoutUnit = (path: string): string => path.replace(/_[A-Za-z]+$/, '');
const withoutIndex = (path: string): string => path.replace(/\[\d+\]/, '[]');

/** Those of the assumed wire paths that the model can look at. */
export function assumedInModel(paths: readonly string[]): readonly AssumedValue[] {
  return paths
    .map(withoutUnit)
    .filter((path) => ASSUMABLE_PATHS.includes(withoutIndex(path)))
    .map((path) => ({ path, range: null }));
}

/** The assumed wire path of a model path, and what one of its unit is in SI; undefined where no value of that name was assumed. */
export function assumedOnWire(path: string, assumed: readonly string[]): { readonly path: string; readonly unit: number } | undefined {
  const found = assumed.find((one) => withoutUnit(one) === path);
  const unit = UNITS[found?.slice(path.length + 1) ?? ''];
  return found === undefined || unit === undefined ? undefined : { path: found, unit };
}
