/**
 * Judges what was asked, in whatever thread it is called: finds the circuits that it may be, judges them, and on demand grades lamp counts
 * and looks for remedies. The model does all of the work.
 */
import {
  type Effort,
  findRemedies,
  type Judgement,
  type JudgeOptions,
  judgeCounts,
  judgePairing,
  judgeVariants,
  type Pairing,
} from '../../model/index.ts';
import type { AskedCircuit, AskedJudgement, AskedOptions, FoundLamp } from './asked-circuit.ts';
import { possibleCircuits } from './possible-circuits.ts';
import type { CircuitFailure } from './simulation.ts';

type Outcome = { readonly ok: true; readonly value: AskedJudgement } | { readonly ok: false; readonly failure: CircuitFailure };

export function judgeAsked(asked: AskedCircuit, { lampCount, remedies, ...given }: AskedOptions): Outcome {
  const possible = possibleCircuits(asked);
  if (!possible.ok) return possible;
  const variants = possible.circuits.map(({ name, lamps }) => ({ name, pairing: { ...asked, lamps } satisfies Pairing }));
  const [only] = possible.circuits;
  const options = withoutSums(given, only?.found ?? []);
  const judged =
    variants.length === 1 ? judgePairing(variants[0]?.pairing as Pairing, options) : judgeVariants(variants, possible.ask, options);
  if (!judged.ok) return judged;

  const at = Math.max(
    0,
    judged.value.variants.findIndex(({ shown }) => shown),
  );
  const { name = '', pairing } = variants[at] ?? {};
  if (pairing === undefined) throw new Error('A judgement shows one of the circuits that were judged.');
  const circuit = name === '' ? null : name;
  const counts = lampCount === null ? null : judgeCounts(pairing, lampCount, options);
  if (counts?.ok === false) return { ok: false, failure: { ...counts.failure, issues: counts.failure.issues.map(asOption) } };
  const cures = remedies ? findRemedies(pairing, options) : null;
  if (cures?.ok === false) return cures;
  return {
    ok: true,
    value: {
      ...judged.value,
      foundLamps: possible.circuits[at]?.found ?? [],
      lampCounts: counts === null || lampCount === null ? null : { ...counts.value, circuit, group: lampCount.group },
      remedies: cures === null ? null : { ...cures.value, circuit },
      counters: [counts, cures].reduce((sum, more) => (more === null ? sum : added(sum, more.value.counters)), judged.value.counters),
    },
  };
}

/** The model names what was asked for beside the pairing by itself. */
function asOption({ path, message }: { readonly path: string; readonly message: string }) {
  return { path: path.startsWith('lampCount') ? `options.${path}` : path, message };
}

/** The series resistor of a fitted reservoir is not free: it and the surge resistor add up to what the record shows. */
function withoutSums(options: JudgeOptions, found: readonly FoundLamp[]): JudgeOptions {
  const bound = found.flatMap((lamp) =>
    lamp.known === 'record' && lamp.form === 'reservoir' ? [`lamps[${lamp.group}].lamp.input.seriesResistance`] : [],
  );
  if (options.assumed === undefined || bound.length === 0) return options;
  return { ...options, assumed: options.assumed.filter(({ path }) => !bound.includes(path)) };
}

function added(a: Judgement['counters'], b: Effort): Effort {
  return {
    halfCycles: a.halfCycles + b.halfCycles,
    steps: a.steps + b.steps,
    events: a.events + b.events,
    modesBuilt: a.modesBuilt + b.modesBuilt,
    stops: a.stops + b.stops,
    sparedStops: a.sparedStops + b.sparedStops,
  };
}
