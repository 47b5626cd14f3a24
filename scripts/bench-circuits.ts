/**
 * The circuits that the engine is benchmarked on, as a user would state them: everything not stated is the service's default. Generic
 * values, nobody's product.
 */
import type { Pairing } from '../model/index.ts';
import { askedPairing } from '../server/schemas/pairing.ts';
import { parseWire } from '../server/schemas/wire-parsing.ts';
import { shownPairing } from '../server/simulation/asked-circuit.ts';
import { completePairing } from '../server/verdicts/pairing-completion.ts';
import { toModel } from '../server/verdicts/pairing-to-model.ts';

export interface BenchCircuit {
  readonly kind: string;
  readonly name: string;
  readonly pairing: Pairing;
}

const EVERYDAY = { latchingCurrent_mA: 50, holdingCurrent_mA: 30 };
const FINE = { latchingCurrent_mA: 25, holdingCurrent_mA: 14 };
const TIMED = { ...EVERYDAY, drive: { kind: 'timed', pulses: 'single', gatePulse_us: 100 } };

const filament = (watts: number) => ({ ratedPower_W: watts, load: { kind: 'resistive' } });
const table = (...points: readonly (readonly [number, number])[]) => ({
  ratedPower_W: 8,
  load: { kind: 'iv-table', points: points.map(([voltage_V, current_mA]) => ({ voltage_V, current_mA })) },
});
const LIKE_A_RESISTOR = table([0, 0], [325, 49.2]);
const LINEAR_STRING = table([0, 0], [200, 0], [215, 50], [340, 50]);
const CONSTANT_POWER = table([0, 0], [60, 0], [80, 70], [120, 66], [200, 40], [325, 24.6]);
const RESERVOIR = { ratedPower_W: 8, load: { kind: 'reservoir', capacitance_uF: 4.7, surgeResistance_Ohm: 10, power_W: 8 } };

type Lamps = readonly (readonly [count: number, lamp: object])[];

const STATED: readonly (readonly [kind: string, name: string, dimmer: object, lamps: Lamps])[] = [
  ['resistive', 'one 60 W filament lamp', EVERYDAY, [[1, filament(60)]]],
  ['resistive', 'five 40 W filament lamps, timed drive', TIMED, [[5, filament(40)]]],
  ['iv-table', 'one 8 W lamp like a resistor', EVERYDAY, [[1, LIKE_A_RESISTOR]]],
  ['iv-table', 'four 8 W lamps like resistors', EVERYDAY, [[4, LIKE_A_RESISTOR]]],
  ['iv-table', 'four 8 W lamps like resistors, timed drive', TIMED, [[4, LIKE_A_RESISTOR]]],
  ['iv-table', 'one linear string', FINE, [[1, LINEAR_STRING]]],
  ['iv-table', 'five linear strings', EVERYDAY, [[5, LINEAR_STRING]]],
  ['iv-table', 'three constant-power lamps', EVERYDAY, [[3, CONSTANT_POWER]]],
  ['reservoir', 'one 8 W reservoir lamp', FINE, [[1, RESERVOIR]]],
  ['reservoir', 'five 8 W reservoir lamps', EVERYDAY, [[5, RESERVOIR]]],
  [
    'mixed',
    'a 25 W filament lamp beside two reservoir lamps and two like resistors',
    EVERYDAY,
    [
      [1, filament(25)],
      [2, RESERVOIR],
      [2, LIKE_A_RESISTOR],
    ],
  ],
];

export function benchPairing(dimmer: object, lamps: Lamps): Pairing {
  const asked = parseWire(askedPairing, {
    mains: { voltage_V: 230, frequency_Hz: 50 },
    dimmer,
    lamps: lamps.map(([count, lamp]) => ({ count, lamp })),
  });
  if (!asked.ok) throw new Error(`a bench circuit is not a pairing: ${JSON.stringify(asked.issues)}`);
  return shownPairing(toModel(completePairing(asked.value)).pairing, []);
}

export function benchCircuits(): BenchCircuit[] {
  return STATED.map(([kind, name, dimmer, lamps]) => ({ kind, name, pairing: benchPairing(dimmer, lamps) }));
}

/** one to six different lamp groups on one everyday dimmer: for how the cost grows with groups */
export function groupedPairing(groups: number): Pairing {
  const watts = [6, 7, 8, 9, 10, 11].slice(0, groups);
  return benchPairing(
    EVERYDAY,
    watts.map(
      (w) =>
        [
          2,
          {
            ratedPower_W: w,
            load: {
              kind: 'iv-table',
              points: [
                { voltage_V: 0, current_mA: 0 },
                { voltage_V: 325, current_mA: w * 6.15 },
              ],
            },
          },
        ] as const,
    ),
  );
}
