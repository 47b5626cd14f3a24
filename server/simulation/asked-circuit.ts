/**
 * A pairing as it goes to a thread: a lamp is known by its circuit, by a record of its current, or by its class alone. What comes back is
 * the judgement with what was found out about such lamps. Plain data, SI units.
 */
import type {
  ClassCandidate,
  ClassLamp,
  ClassLamps,
  CountRange,
  FitGround,
  Judgement,
  JudgeOptions,
  Lamp,
  LampCounts,
  Pairing,
  PhaseTable,
  ProfileFit,
  Remedies,
} from '../../model/index.ts';

export interface AskedCircuit extends Omit<Pairing, 'lamps'> {
  readonly lamps: readonly AskedGroup[];
}

export type AskedGroup = { readonly count: number } & (
  | { readonly known: 'circuit'; readonly lamp: Lamp }
  | {
      readonly known: 'record';
      readonly table: PhaseTable;
      readonly ground: FitGround;
      /** Ohm, between which the series resistor may lie where it was not given */
      readonly seriesRange: readonly [number, number] | null;
    }
  | { readonly known: 'class'; readonly of: ClassLamp }
);

export interface AskedOptions extends JudgeOptions {
  readonly lampCount: CountRange | null;
  readonly remedies: boolean;
}

/** What was found out about a lamp that was not given by its circuit; `lamp` is the one that the judgement shows. */
export type FoundLamp = { readonly group: number; readonly lamp: Lamp } & (
  | ({ readonly known: 'record' } & Omit<ProfileFit, 'lamp'>)
  | ({ readonly known: 'class'; readonly candidates: readonly Omit<ClassCandidate, 'lamp'>[] } & Omit<ClassLamps, 'candidates'>)
);

/** Counts and remedies are those of one circuit: the one that is shown, by its name where there are several. */
export type OfOneCircuit<T> = T & { readonly circuit: string | null };

export interface AskedJudgement extends Judgement {
  readonly foundLamps: readonly FoundLamp[];
  readonly lampCounts: (OfOneCircuit<LampCounts> & { readonly group: number }) | null;
  readonly remedies: OfOneCircuit<Remedies> | null;
}

/** The pairing with the lamps that a judgement showed: what waveforms and requirements are asked about. */
export function shownPairing(asked: AskedCircuit, found: readonly FoundLamp[]): Pairing {
  const lamps = asked.lamps.map((group, index) => {
    if (group.known === 'circuit') return { count: group.count, lamp: group.lamp };
    const lamp = found.find((one) => one.group === index)?.lamp;
    if (lamp === undefined) throw new Error(`The judgement found no circuit for lamps[${index}].`);
    return { count: group.count, lamp };
  });
  return { ...asked, lamps };
}
