/**
 * Who gets the next free thread: everyone in the interactive lane, in the order of asking, and only then the background. It counts
 * slots and knows no threads.
 */

export type Lane = 'interactive' | 'background';

export interface ThreadLanes {
  /** Resolves when a slot is free and it is this caller's turn; false where the lanes were closed meanwhile. */
  enter(lane: Lane): Promise<boolean>;
  /** Gives the slot to whoever is next. */
  leave(): void;
  waiting(lane: Lane): number;
  /** Resolves when nobody runs and nobody waits. */
  idle(): Promise<void>;
  /** Turns away everyone who waits, and whoever still comes. */
  close(): void;
}

type Admit = (admitted: boolean) => void;

export function threadLanes(slots: number): ThreadLanes {
  const lanes: { readonly [lane in Lane]: Admit[] } = { interactive: [], background: [] };
  let idleWaiters: (() => void)[] = [];
  let running = 0;
  let closed = false;

  const next = (): Admit | undefined => lanes.interactive.shift() ?? lanes.background.shift();
  const tellIdle = (): void => {
    if (running > 0 || lanes.interactive.length + lanes.background.length > 0) return;
    for (const tell of idleWaiters) tell();
    idleWaiters = [];
  };

  return {
    enter: async (lane) => {
      if (closed) return false;
      if (running < slots) {
        running += 1;
        return true;
      }
      return new Promise((admit) => {
        lanes[lane].push(admit);
      });
    },
    leave: () => {
      const admit = next();
      if (admit === undefined) {
        running -= 1;
        tellIdle();
      } else {
        // The slot changes hands without ever being free.
        admit(true);
      }
    },
    waiting: (lane) => lanes[lane].length,
    idle: () =>
      new Promise((resolve) => {
        idleWaiters.push(resolve);
        tellIdle();
      }),
    close: () => {
      closed = true;
      for (let admit = next(); admit !== undefined; admit = next()) admit(false);
      tellIdle();
    },
  };
}
