/**
 * The state of a running screening: running, or paused for a reason. It is written to the record when that can be written, and shown
 * from memory while it cannot, as on a full disk.
 */
import type { ScreeningStore, StateChange } from '../../db/screenings.ts';
import type { PauseReason } from '../schemas/screening.ts';
import { diskTrouble } from './disk-trouble.ts';

export interface Pause {
  readonly reason: PauseReason;
  readonly detail: string;
}

export interface RunState {
  pause(): Pause | null;
  begin(pause: Pause): void;
  /** Only ends a pause of this reason. */
  end(reason: PauseReason): void;
}

export interface RunStateParts {
  readonly store: Pick<ScreeningStore, 'change' | 'together'>;
  readonly seq: number;
  readonly now: () => Date;
  readonly tell: () => void;
  /** a run that is over changes no state any more: the screening may be cancelled */
  readonly isOver: () => boolean;
}

export function runState({ store, seq, now, tell, isOver }: RunStateParts): RunState {
  let current: Pause | null = null;
  let unwritten: StateChange[] = [];

  const write = (change: StateChange): void => {
    unwritten.push(change);
    try {
      store.together(() => {
        for (const late of unwritten) store.change(seq, late);
      });
      unwritten = [];
    } catch (error) {
      if (diskTrouble(error) === undefined) throw error;
    }
    tell();
  };

  return {
    pause: () => current,
    begin: (pause) => {
      if (current !== null || isOver()) return;
      current = pause;
      write({ state: 'paused', pause: JSON.stringify(pause), detail: pause.detail, at: now().toISOString() });
    },
    end: (reason) => {
      if (current?.reason !== reason || isOver()) return;
      current = null;
      write({ state: 'running', at: now().toISOString() });
    },
  };
}
