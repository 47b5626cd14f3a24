/** Tells whoever watches a screening that something about it changed. It carries no data: watchers read what they need. */

export interface ScreeningSignals {
  tell(id: string): void;
  /** Resolves at the next change, after `at most` ms, or when the signal is aborted; never rejects. */
  next(id: string, atMost_ms: number, signal: AbortSignal): Promise<void>;
}

export function screeningSignals(): ScreeningSignals {
  const waiting = new Map<string, Set<() => void>>();
  return {
    tell: (id) => {
      const wakes = waiting.get(id);
      waiting.delete(id);
      for (const wake of wakes ?? []) wake();
    },
    next: (id, atMost_ms, signal) =>
      new Promise((resolve) => {
        const wakes = waiting.get(id) ?? new Set();
        waiting.set(id, wakes);
        const wake = (): void => {
          clearTimeout(timer);
          signal.removeEventListener('abort', wake);
          wakes.delete(wake);
          if (wakes.size === 0 && waiting.get(id) === wakes) waiting.delete(id);
          resolve();
        };
        const timer = setTimeout(wake, atMost_ms);
        wakes.add(wake);
        signal.addEventListener('abort', wake);
        if (signal.aborted) wake();
      }),
  };
}
