/**
 * How chunks and their answers travel over Redis, for both sides: the queue of a model version, a chunk's id, and answers packed small.
 * Redis carries them and keeps nothing: the record is the service's.
 */
import { createHash } from 'node:crypto';
import { deflateRawSync, inflateRawSync } from 'node:zlib';
import type { Answer, Chunk } from './judging-queue.ts';

/** A worker only ever sees the chunks of its own model version; what the name has no room for is left out of it. */
export function queueName(modelVersion: string): string {
  return `holdfast-pairings-${modelVersion.replace(/[^\w.-]/g, '_')}`;
}

/**
 * The same questions of a screening, asked the same time, have the same id: who asks again after a restart finds the answers, or the
 * chunk still waiting, instead of having everything judged twice.
 */
export function chunkId({ screening, questions }: Chunk, attempt: number): string {
  const hash = createHash('sha256');
  for (const { fingerprint } of questions) hash.update(fingerprint);
  return `${screening}-${hash.digest('hex').slice(0, 24)}-${attempt}`;
}

/** Judgements are repetitive text: packed they take a tenth, which Redis holds until they are fetched. */
export function packAnswers(answers: readonly Answer[]): string {
  return deflateRawSync(JSON.stringify(answers)).toString('base64');
}

export function unpackAnswers(packed: string): readonly Answer[] {
  return JSON.parse(inflateRawSync(Buffer.from(packed, 'base64')).toString('utf8')) as readonly Answer[];
}
