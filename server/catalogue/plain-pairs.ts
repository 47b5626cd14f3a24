/**
 * Whether a judged pairing speaks for its dimmer and its lamp as they stand: one kind of lamp, nothing added, judged no less strictly
 * than by default. Badges, look-ups and lists of partners show such verdicts alone: nobody sees there what else was asked.
 */
import type { JudgedPairing } from '../schemas/pairing.ts';
import { OPTIONS_DEFAULTS, supplyBandDefaults } from '../verdicts/pairing-defaults.ts';

/** %; a wider step on the dial could hide an unsteady stretch that the default would find */
const WIDEST_STEP = 10;

export function isPlainPair({ mains, lamps, addedLoad, options }: JudgedPairing): boolean {
  const { dialPositions_pct, dropOutAngle_deg, corners, supplyBand } = options;
  const band = supplyBandDefaults({ voltage: mains.voltage_V, frequency: mains.frequency_Hz });
  return (
    lamps.length === 1 &&
    addedLoad === null &&
    corners === OPTIONS_DEFAULTS.corners.at230 &&
    supplyBand.low_pct <= band.low_pct.at230 &&
    supplyBand.high_pct >= band.high_pct.at230 &&
    dropOutAngle_deg <= OPTIONS_DEFAULTS.dropOutAngle_deg.at230 &&
    dialPositions_pct[0] === 0 &&
    dialPositions_pct.at(-1) === 100 &&
    dialPositions_pct.every((position, index) => index === 0 || position - (dialPositions_pct[index - 1] ?? 0) <= WIDEST_STEP)
  );
}
