/**
 * How fast a screening goes, and how long it will take: from what was measured, never from a constant. A pairing's cost is taken to
 * grow with its dial positions and corners.
 */
import type { ScreeningStore } from '../../db/screenings.ts';
import { MODEL_VERSION } from '../../model/index.ts';
import type { ScreeningRequest } from '../schemas/screening.ts';
import { OPTIONS_DEFAULTS } from '../verdicts/pairing-defaults.ts';

/** ms that the rate looks back */
const WINDOW = 5 * 60_000;
/** samples kept of a window */
const SAMPLES = 120;

export interface RateMeter {
  /** pairings looked at so far, at a time in ms */
  note(lookedAt: number, at: number): void;
  perHour(at: number): number | null;
}

export function rateMeter(): RateMeter {
  let samples: { readonly lookedAt: number; readonly at: number }[] = [];
  return {
    note: (lookedAt, at) => {
      const last = samples.at(-1);
      if (last !== undefined && at - last.at < WINDOW / SAMPLES && samples.length > 1) samples.pop();
      samples.push({ lookedAt, at });
      samples = samples.filter((sample) => at - sample.at <= WINDOW);
    },
    perHour: (at) => {
      const recent = samples.filter((sample) => at - sample.at <= WINDOW);
      const [first] = recent;
      const last = recent.at(-1);
      if (first === undefined || last === undefined || last.lookedAt === first.lookedAt || last.at <= first.at) return null;
      return ((last.lookedAt - first.lookedAt) * 3_600_000) / (last.at - first.at);
    },
  };
}

export interface MeasuredCost {
  /** ms of one thread for one pairing of the request */
  readonly pairing_ms: number;
  /** judged pairings it was measured on */
  readonly judged: number;
}

/** What one pairing of a request costs, going by the latest screenings under this model version; undefined before anything was judged. */
export function measuredCost(
  store: Pick<ScreeningStore, 'measured'>,
  request: Pick<ScreeningRequest, 'options'>,
): MeasuredCost | undefined {
  const measured = store.measured(MODEL_VERSION);
  const judged = measured.reduce((sum, { done }) => sum + done, 0);
  const judging_ms = measured.reduce((sum, screening) => sum + screening.judging_ms, 0);
  const weight = measured.reduce((sum, { request: text, done }) => sum + done * weightOf(JSON.parse(text) as ScreeningRequest), 0);
  return judged === 0 || weight === 0 ? undefined : { pairing_ms: (judging_ms / weight) * weightOf(request), judged };
}

/** Dial positions times corners: the four corners of a whole judgement cost about three times the nominal one alone, which is always judged in full. */
function weightOf({ options }: Pick<ScreeningRequest, 'options'>): number {
  const positions = options?.dialPositions_pct?.length ?? OPTIONS_DEFAULTS.dialPositions_pct.at230.length;
  return positions * ((options?.corners ?? OPTIONS_DEFAULTS.corners.at230) === 'all' ? 3 : 1);
}
