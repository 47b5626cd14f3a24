/**
 * Answers kept ready as bytes, with their entity tags, up to a given weight in all; the one that was not asked for longest goes first.
 * Whether a kept answer still holds is its keeper's to say.
 */
import { createHash } from 'node:crypto';

export interface Answer {
  readonly bytes: Buffer;
  /** of exactly these bytes */
  readonly tag: string;
}

export interface KeptAnswers<Kept extends Answer> {
  get(key: string): Kept | undefined;
  keep(key: string, answer: Kept): void;
  clear(): void;
}

/** bytes that an answer weighs beyond its own, about */
const OVERHEAD = 300;

export function answerOf(text: string): Answer {
  const bytes = Buffer.from(text);
  return { bytes, tag: `"${createHash('sha256').update(bytes).digest('base64url').slice(0, 22)}"` };
}

export function keepingAnswers<Kept extends Answer>(mostBytes: number): KeptAnswers<Kept> {
  // In the order of last use: a Map iterates in the order of insertion.
  const kept = new Map<string, Kept>();
  let weight = 0;
  const drop = (key: string, answer: Answer): void => {
    kept.delete(key);
    weight -= answer.bytes.length + OVERHEAD;
  };
  return {
    get: (key) => {
      const answer = kept.get(key);
      if (answer === undefined) return undefined;
      kept.delete(key);
      kept.set(key, answer);
      return answer;
    },
    keep: (key, answer) => {
      const before = kept.get(key);
      if (before !== undefined) drop(key, before);
      kept.set(key, answer);
      weight += answer.bytes.length + OVERHEAD;
      for (const [oldest, old] of kept) {
        if (weight <= mostBytes) break;
        drop(oldest, old);
      }
    },
    clear: () => {
      kept.clear();
      weight = 0;
    },
  };
}
