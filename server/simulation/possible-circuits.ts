/**
 * The circuits that a pairing may be, where a lamp is known only by its class or by a record: one where there is no doubt, else each
 * combination. What may be the case and cannot be told apart is judged, and not chosen.
 */
import {
  type ClassCandidate,
  type FitGround,
  fitPhaseTable,
  type Lamp,
  lampsOfClass,
  type PhaseTable,
  type ProfileFit,
} from '../../model/index.ts';
import type { AskedCircuit, AskedGroup, FoundLamp } from './asked-circuit.ts';
import type { CircuitFailure } from './simulation.ts';

/** circuits judged for one question; two kinds of lamps known by their class make at most 25, and a judgement of each takes a second or so */
const MOST_CIRCUITS = 36;

export interface PossibleCircuit {
  /** empty where there is only this one */
  readonly name: string;
  readonly lamps: readonly { readonly count: number; readonly lamp: Lamp }[];
  readonly found: readonly FoundLamp[];
}

export type PossibleCircuits =
  | {
      readonly ok: true;
      readonly circuits: readonly PossibleCircuit[];
      /** what to ask the lamps' makers for; empty where nothing is open */
      readonly ask: string;
    }
  | { readonly ok: false; readonly failure: CircuitFailure };

/** What one group of lamps may be. */
interface Possibilities {
  readonly ask: string;
  readonly lamps: readonly { readonly name: string; readonly lamp: Lamp; readonly found: FoundLamp | null }[];
}

export function possibleCircuits(asked: AskedCircuit): PossibleCircuits {
  const groups: Possibilities[] = [];
  for (const [group, one] of asked.lamps.entries()) {
    const possible = possibilitiesOf(one, group);
    if (!possible.ok) return possible;
    groups.push(possible.value);
  }
  const number = groups.reduce((product, { lamps }) => product * lamps.length, 1);
  if (number > MOST_CIRCUITS) {
    const message = `may be ${number} different circuits, and at most ${MOST_CIRCUITS} are judged: give the circuit or a record of some of them`;
    return { ok: false, failure: { kind: 'invalid-pairing', issues: [{ path: 'lamps', message }] } };
  }
  const open = groups.map(({ lamps }) => lamps.length > 1);
  const several = open.filter(Boolean).length > 1;
  let circuits: PossibleCircuit[] = [{ name: '', lamps: [], found: [] }];
  for (const [group, { lamps }] of groups.entries()) {
    const count = asked.lamps[group]?.count ?? 1;
    circuits = circuits.flatMap((before) =>
      lamps.map(({ name, lamp, found }) => {
        const own = !open[group] ? '' : several ? `lamps[${group}]: ${name}` : name;
        return {
          name: [before.name, own].filter((part) => part !== '').join(' with '),
          lamps: [...before.lamps, { count, lamp }],
          found: found === null ? before.found : [...before.found, found],
        };
      }),
    );
  }
  const asks = groups.flatMap(({ ask }, group) => (open[group] ? [several ? `${ask} (lamps[${group}])` : ask] : []));
  return { ok: true, circuits, ask: asks.join('; and for ') };
}

type Resolved = { readonly ok: true; readonly value: Possibilities } | { readonly ok: false; readonly failure: CircuitFailure };

function possibilitiesOf(one: AskedGroup, group: number): Resolved {
  if (one.known === 'circuit') return { ok: true, value: { ask: '', lamps: [{ name: '', lamp: one.lamp, found: null }] } };
  if (one.known === 'record') return fittedLamps(one, group);
  const spanned = lampsOfClass(one.of);
  if (!spanned.ok) return { ok: false, failure: { kind: 'profile-refused', group, failure: spanned.failure } };
  const { candidates, ...about } = spanned.value;
  const told = candidates.map(({ lamp: _, ...candidate }) => candidate);
  const lamps = candidates.map((candidate) => {
    const { lamp } = candidate;
    return { name: candidateName(candidate), lamp, found: { known: 'class' as const, group, lamp, ...about, candidates: told } };
  });
  return { ok: true, value: { ask: about.ask, lamps } };
}

/** One circuit stands in a class at both ends of its range, where only its power factor tells it apart. */
export function candidateName({ name, powerFactor }: Pick<ClassCandidate, 'name' | 'powerFactor'>): string {
  return `${name} (power factor ${powerFactor.toFixed(2)})`;
}

/**
 * Of a reservoir lamp a record shows only what the resistor before its input capacitor and the one behind it add up to; where the first
 * is not given, the lamp is also fitted with it at both ends of the usual range. A static curve has no such sum: there the model is told
 * that the resistor was assumed.
 */
function fittedLamps(
  {
    table,
    ground,
    seriesRange,
  }: { readonly table: PhaseTable; readonly ground: FitGround; readonly seriesRange: readonly [number, number] | null },
  group: number,
): Resolved {
  const first = fitPhaseTable(table, ground);
  if (!first.ok) return { ok: false, failure: { kind: 'profile-refused', group, failure: first.failure } };
  const fits: ProfileFit[] = [first.value];
  if (first.value.form === 'reservoir' && seriesRange !== null) {
    for (const seriesResistance of seriesRange) {
      const again = fitPhaseTable(table, { ...ground, seriesResistance });
      if (!again.ok || again.value.form !== 'reservoir') continue;
      if (!fits.some((fit) => fit.lamp.input.seriesResistance === again.value.lamp.input.seriesResistance)) fits.push(again.value);
    }
  }
  const lamps = fits.map(({ lamp, ...fit }) => ({
    name: `${Number(lamp.input.seriesResistance.toPrecision(3))} Ohm before the input capacitor`,
    lamp,
    found: { known: 'record' as const, group, lamp, ...fit },
  }));
  return { ok: true, value: { ask: 'the resistor before its input capacitor', lamps } };
}
