/** Shows a screening as it stands: its row, and what only the process that runs it knows. */
import type { ScreeningRow } from '../../db/screenings.ts';
import type { ScreeningAnswer, ScreeningRequest } from '../schemas/screening.ts';
import type { Pause } from './run-state.ts';
import type { MeasuredCost } from './screening-speed.ts';

/** What stands in no row. */
export interface Standing {
  readonly pause: Pause | null;
  readonly waitingFor: string | undefined;
  readonly perHour: number | null;
  readonly cost: MeasuredCost | undefined;
  /** pairings judged side by side */
  readonly breadth: number | undefined;
  /** of those to go, how many are stored already, where it is known */
  readonly knownStored: number;
  readonly now: Date;
}

export function screeningToWire(row: ScreeningRow, standing: Standing): ScreeningAnswer {
  const pause = row.ended_at !== null ? null : (standing.pause ?? (row.pause === null ? null : (JSON.parse(row.pause) as Pause)));
  const counts = countsToWire(row);
  return {
    id: row.id,
    state: pause !== null ? 'paused' : row.state,
    pause,
    waitingFor: standing.waitingFor ?? null,
    createdAt: row.created_at,
    startAt: row.start_at,
    startedAt: row.started_at,
    endedAt: row.ended_at,
    modelVersion: row.model_version,
    request: JSON.parse(row.request) as ScreeningRequest,
    selected: { lamps: row.lamps, dimmers: row.dimmers },
    counts,
    rate_perHour: standing.perHour === null ? null : Math.round(standing.perHour),
    estimate: row.ended_at !== null || counts.toGo === 0 ? null : estimateOf(counts.toGo, standing),
  };
}

export function countsToWire({ total, stored, done, failed }: Pick<ScreeningRow, 'total' | 'stored' | 'done' | 'failed'>) {
  return { total, stored, done, failed, toGo: total - stored - done - failed };
}

function estimateOf(toGo: number, { perHour, cost, breadth, knownStored, now }: Standing): ScreeningAnswer['estimate'] {
  const estimate = (remaining_s: number, basis: string) => ({
    remaining_s: Math.ceil(remaining_s),
    endsAt: new Date(now.getTime() + remaining_s * 1000).toISOString(),
    basis,
  });
  if (perHour !== null) return estimate((toGo * 3600) / perHour, 'the rate of the last minutes');
  if (cost === undefined) return null;
  const abreast = breadth ?? 1;
  const remaining_s = ((toGo - knownStored) * cost.pairing_ms) / 1000 / abreast;
  return estimate(remaining_s, `${cost.judged} pairings judged before, ${abreast} judged at a time`);
}
