/** Shows how far a screening is: a bar that is drawn again in place in a terminal, a line now and then where the output goes elsewhere. */
import { setTimeout } from 'node:timers/promises';
import cliProgress from 'cli-progress';
import type { ScreeningAnswer } from '../server/schemas/screening.ts';

export interface ScreeningProgress {
  show(screening: ScreeningAnswer): void;
  /** Leaves the last state standing. */
  end(): void;
}

/** ms between lines where the output is no terminal */
const LINE_EVERY = 10_000;

/** Waits, or until the signal says to stop. Nothing stays behind on the signal: a night has a hundred thousand looks. */
export async function untilNextLook(ms: number, signal: AbortSignal): Promise<void> {
  try {
    await setTimeout(ms, undefined, { signal });
  } catch (error) {
    if (!signal.aborted) throw error;
  }
}

export function screeningProgress(stream: NodeJS.WriteStream): ScreeningProgress {
  const bar = new cliProgress.SingleBar({
    stream,
    format: '[{bar}] {percentage}% | {value} of {total} | {standing}',
    // Characters of any terminal's font, also of one without colours.
    barCompleteChar: '#',
    barIncompleteChar: '.',
    barsize: 24,
    hideCursor: true,
    noTTYOutput: true,
    notTTYSchedule: LINE_EVERY,
    fps: 4,
  });
  let started = false;
  return {
    show: (screening) => {
      const { total, toGo } = screening.counts;
      const payload = { standing: standingOf(screening) };
      if (!started) bar.start(total, total - toGo, payload);
      started = true;
      bar.update(total - toGo, payload);
    },
    end: () => {
      if (started) bar.stop();
    },
  };
}

/** What stands beside the bar, in a few words. */
export function standingOf({ state, pause, waitingFor, counts, rate_perHour, estimate }: ScreeningAnswer): string {
  const failed = counts.failed === 0 ? [] : [`${counts.failed} given up`];
  if (pause !== null) return [`paused: ${pause.detail}`, ...failed].join(', ');
  if (waitingFor !== null) return [waitingFor, ...failed].join(', ');
  if (state === 'finished') return ['done', ...failed].join(', ');
  const rate = rate_perHour === null ? [] : [`${rate_perHour.toLocaleString('en')} an hour`];
  const left = estimate === null ? [] : [`${durationOf(estimate.remaining_s)} left`];
  return [...rate, ...left, ...failed].join(', ') || 'beginning';
}

/** The two largest units are enough: `2 h 05 min`. */
export function durationOf(seconds: number): string {
  const whole = Math.ceil(seconds);
  if (whole < 60) return `${whole} s`;
  const minutes = Math.ceil(whole / 60);
  if (minutes < 60) return `${minutes} min`;
  const hours = Math.floor(minutes / 60);
  return `${hours} h ${String(minutes % 60).padStart(2, '0')} min`;
}
