/** What cannot be simulated is refused with the place and what would be right. */
import { describe, expect, test } from 'vitest';
import { judgePairing } from '../../model/judgement/judge-pairing.ts';
import type { Bleeder, DiacDrive, Dimmer, Lamp, LampInput, Load, Mains, Pairing, TimedDrive } from '../../model/pairing.ts';
import { checkDialPositions, checkPairing } from '../../model/pairing-check.ts';
import {
  bareLamp,
  diacDrive,
  emulator,
  everydayDimmer,
  filament,
  idealDimmer,
  mains230,
  pairing,
  reservoirLamp,
  timedDrive,
} from '../support/model-pairings.ts';

const sound = pairing(mains230, everydayDimmer(), emulator(8, mains230));
const paths = (p: Pairing): string[] => checkPairing(p).map((i) => i.path);

const onMains = (change: Partial<Mains>): Pairing => ({ ...sound, mains: { ...mains230, ...change } });
const onDimmer = (change: Partial<Dimmer>): Pairing => ({ ...sound, dimmer: everydayDimmer(change) });
const onDiac = (change: Partial<DiacDrive>): Pairing => onDimmer({ drive: diacDrive(change) });
const onTimer = (change: Partial<TimedDrive>): Pairing => onDimmer({ drive: timedDrive(change) });
const onLamp = (lamp: Lamp, count = 1): Pairing => pairing(mains230, everydayDimmer(), lamp, count);
const onInput = (change: Partial<LampInput>): Pairing => onLamp(emulator(8, mains230, change));
const onLoad = (load: Load): Pairing => onLamp(bareLamp(load));
const onTable = (...points: [number, number][]): Pairing =>
  onLoad({ kind: 'iv-table', points: points.map(([voltage, current]) => ({ voltage, current })) });
const reservoir = {
  kind: 'reservoir',
  capacitance: 4.7e-6,
  surgeResistance: 10,
  drain: { kind: 'power', power: 8 },
  minimumVoltage: 60,
} as const;
const onBleeder = (bleeder: Bleeder): Pairing => onInput({ bleeder });

describe('what is simulated', () => {
  test.each([
    ['an everyday pairing', sound],
    ['a filament lamp on a bare switch', pairing(mains230, idealDimmer(), filament(40, mains230))],
    ['a reservoir lamp', onLamp(reservoirLamp(8, 4.7e-6, 60), 12)],
    ['an asymmetric dimmer', onDimmer({ latchingCurrent: { positive: 0.05, negative: 0.06 } })],
    ['currents that latch where they hold', onDimmer({ latchingCurrent: { positive: 0.03, negative: 0.03 } })],
    [
      'no turn-off time, drop, snubber or choke',
      onDimmer({ turnOffTime: 0, onVoltage: 0, snubber: null, choke: { inductance: 0, resistance: 0.1, lossResistance: null } }),
    ],
    ['a firing angle of zero', onTimer({ firingAngleFull: 0 })],
    ['a single pulse whatever its spacing', onTimer({ pulses: 'single', pulseSpacing: 0 })],
    [
      'a circuit without any series resistance',
      {
        ...onDimmer({ onResistance: 0, choke: { inductance: 0, resistance: 0, lossResistance: null } }),
        mains: { ...mains230, sourceResistance: 0 },
        lamps: [{ count: 1, lamp: emulator(8, mains230, { seriesResistance: 0 }) }],
      },
    ],
    ['a table that falls', onTable([50, 0.1], [300, 0.02])],
  ])('%s', (_, p) => {
    expect(checkPairing(p)).toEqual([]);
  });
});

describe('what is refused', () => {
  test.each([
    ['no mains voltage', onMains({ voltage: 0 }), 'mains.voltage'],
    ['a mains voltage that is not a number', onMains({ voltage: Number.NaN }), 'mains.voltage'],
    ['a frequency without end', onMains({ frequency: Number.POSITIVE_INFINITY }), 'mains.frequency'],
    ['wiring of negative resistance', onMains({ sourceResistance: -1 }), 'mains.sourceResistance'],
    ['no latching current', onDimmer({ latchingCurrent: { positive: 0, negative: 0.05 } }), 'dimmer.latchingCurrent.positive'],
    [
      'a triac that holds at more than it latches',
      onDimmer({ holdingCurrent: { positive: 0.03, negative: 0.051 } }),
      'dimmer.holdingCurrent.negative',
    ],
    ['a negative turn-off time', onDimmer({ turnOffTime: -1e-6 }), 'dimmer.turnOffTime'],
    ['a triac of negative resistance', onDimmer({ onResistance: -0.1 }), 'dimmer.onResistance'],
    [
      'a choke of negative resistance',
      onDimmer({ choke: { inductance: 1e-3, resistance: -1, lossResistance: null } }),
      'dimmer.choke.resistance',
    ],
    [
      'a choke whose loss is a short circuit',
      onDimmer({ choke: { inductance: 1e-3, resistance: 1, lossResistance: 0 } }),
      'dimmer.choke.lossResistance',
    ],
    ['a snubber of negative resistance', onDimmer({ snubber: { resistance: -1, capacitance: 33e-9 } }), 'dimmer.snubber.resistance'],
    ['a negative interference capacitor', onDimmer({ interferenceCapacitance: -1e-9 }), 'dimmer.interferenceCapacitance'],
    ['timing without a fixed resistor', onDiac({ fixedResistance: 0 }), 'dimmer.drive.fixedResistance'],
    ['a diac that its own dump cannot keep on', onDiac({ gateResistance: 4700 }), 'dimmer.drive.diacHoldingCurrent'],
    ['a diac that drops as much as it breaks over at', onDiac({ residualVoltage: 31.2 }), 'dimmer.drive.residualVoltage'],
    [
      'a second section of no capacitance',
      onDiac({ secondSection: { resistance: 1e4, capacitance: 0 } }),
      'dimmer.drive.secondSection.capacitance',
    ],
    ['a firing angle of half a turn', onTimer({ firingAngleLow: 180 }), 'dimmer.drive.firingAngleLow'],
    ['a gate pulse of no length', onTimer({ gatePulse: 0 }), 'dimmer.drive.gatePulse'],
    ['a train whose pulses overlap', onTimer({ pulses: 'train', gatePulse: 1e-3, pulseSpacing: 1e-3 }), 'dimmer.drive.pulseSpacing'],
    ['no lamp', { ...sound, lamps: [] }, 'lamps'],
    ['half a lamp', onLamp(emulator(8, mains230), 0.5), 'lamps[0].count'],
    ['no lamp of a kind', onLamp(emulator(8, mains230), 0), 'lamps[0].count'],
    ['a lamp input of negative resistance', onInput({ seriesResistance: -1 }), 'lamps[0].lamp.input.seriesResistance'],
    ['a negative input capacitor', onInput({ capacitance: -1e-9 }), 'lamps[0].lamp.input.capacitance'],
    ['an inductor whose loss is a short circuit', onInput({ inductance: 1e-3, inductorLoss: 0 }), 'lamps[0].lamp.input.inductorLoss'],
    [
      'a damper of negative resistance',
      onInput({ damper: { resistance: -1, capacitance: 1e-7 } }),
      'lamps[0].lamp.input.damper.resistance',
    ],
    ['a bleeder of no resistance', onBleeder({ kind: 'resistor', resistance: 0 }), 'lamps[0].lamp.input.bleeder.resistance'],
    ['an active bleeder of no current', onBleeder({ kind: 'active', current: 0, below: 100 }), 'lamps[0].lamp.input.bleeder.current'],
    ['a load of no resistance', onLoad({ kind: 'resistive', resistance: 0 }), 'lamps[0].lamp.load.resistance'],
    ['a table of one point', onTable([10, 0.1]), 'lamps[0].lamp.load.points'],
    ['a table that goes back', onTable([10, 0.1], [10, 0.2]), 'lamps[0].lamp.load.points[1].voltage'],
    ['a table that feeds the mains', onTable([10, 0.1], [20, -0.1]), 'lamps[0].lamp.load.points[1].current'],
    ['a reservoir of no capacitance', onLoad({ ...reservoir, capacitance: 0 }), 'lamps[0].lamp.load.capacitance'],
    ['a reservoir of negative surge resistance', onLoad({ ...reservoir, surgeResistance: -1 }), 'lamps[0].lamp.load.surgeResistance'],
    ['a reservoir drained to nothing', onLoad({ ...reservoir, minimumVoltage: 0 }), 'lamps[0].lamp.load.minimumVoltage'],
    [
      'a reservoir that nothing drains',
      onLoad({ ...reservoir, drain: { kind: 'current', current: 0 } }),
      'lamps[0].lamp.load.drain.current',
    ],
    ['an added load of no resistance', { ...sound, addedLoad: { kind: 'resistor', resistance: 0 } as const }, 'addedLoad.resistance'],
  ])('%s', (_, p, path) => {
    expect(paths(p)).toContain(path);
  });

  test('names every fault, not only the first', () => {
    const faulty = { ...onMains({ voltage: -1 }), lamps: [{ count: 0, lamp: filament(40, mains230, { seriesResistance: -1 }) }] };
    expect(paths(faulty)).toEqual(expect.arrayContaining(['mains.voltage', 'lamps[0].count', 'lamps[0].lamp.input.seriesResistance']));
  });

  test.each([
    ['no position', [], 'dialPositions'],
    ['a position beyond the end of the dial', [50, 101], 'dialPositions[1]'],
    ['a position that is not a number', [Number.NaN], 'dialPositions[0]'],
    ['positions that do not rise', [0, 50, 50], 'dialPositions[2]'],
    ['too many positions', Array.from({ length: 102 }, (_, k) => k / 2), 'dialPositions'],
  ])('a dial of %s', (_, positions, path) => {
    expect(checkDialPositions(positions).map((i) => i.path)).toContain(path);
  });

  test('a judgement returns the refusal as a value', () => {
    const outcome = judgePairing(onMains({ voltage: 0 }), { dialPositions: [50], corners: 'nominal', dropOutAngle: 0 });
    expect(outcome.ok).toBe(false);
    if (outcome.ok) return;
    expect(outcome.failure.issues.map((i) => i.path)).toEqual(['mains.voltage', 'dropOutAngle']);
  });
});
