/**
 * Fills an empty record with as many verdicts as a benchmark wants: pairs of a made-up catalogue, each tied to its entries, with the
 * evidence of real judgements of the example pairings. Every row has the size and the columns of a real one; what it says of its pair
 * is not so.
 */
import { createHash } from 'node:crypto';
import { readdirSync, readFileSync } from 'node:fs';
import { type Evidence, type WrittenEvidence, writeEvidence } from '../db/evidence.ts';
import type { RecordDatabase } from '../db/record.ts';
import { storesOf } from '../db/stores.ts';
import { type Grade, MODEL_VERSION } from '../model/index.ts';
import { putEntry } from '../server/catalogue/entries.ts';
import { type AskedPairing, askedPairing } from '../server/schemas/pairing.ts';
import { directSimulation } from '../server/simulation/direct-simulation.ts';
import { completePairing } from '../server/verdicts/pairing-completion.ts';
import { toModel } from '../server/verdicts/pairing-to-model.ts';
import { verdictRowOf } from '../server/verdicts/verdict-judging.ts';

export interface Catalogue {
  readonly dimmers: number;
  readonly lamps: number;
  readonly counts: number;
}

export const dimmerId = (number: number) => `dimmer-${String(number).padStart(5, '0')}`;
export const lampId = (number: number) => `lamp-${String(number).padStart(6, '0')}`;

/** 20,000 pairs at most, so that each lamp and each dimmer has more verdicts the more there are, as in a real catalogue. */
export function catalogueFor(rows: number): Catalogue {
  const counts = 5;
  const dimmers = Math.max(4, Math.min(200, Math.round(Math.sqrt(rows / counts / 5))));
  return { dimmers, lamps: Math.ceil(rows / counts / dimmers), counts };
}

export const OLD_VERSION = '0';
/** of the made-up times: verdict n was computed n times this later, in ms */
export const FIRST_AT = Date.parse('2026-01-05T08:00:00.000Z');
export const APART = 200;

export function verdictIdOf(number: number): string {
  return fingerprintOf(number).toString('hex').slice(0, 26);
}

function fingerprintOf(number: number): Buffer {
  return createHash('sha256').update(`verdict ${number}`).digest();
}

export interface RealVerdict {
  readonly grade: Grade;
  readonly summary: string;
  readonly evidence: WrittenEvidence;
  /** the same before it was written */
  readonly json: Evidence;
  readonly asked: AskedPairing;
}

/** Every example pairing that can be judged as it stands, with 1, 2 and 5 lamps in its first group. */
export async function realVerdicts(): Promise<readonly RealVerdict[]> {
  const folder = new URL('./examples/', import.meta.url);
  const names = readdirSync(folder).filter((name) => name.endsWith('.json'));
  const pairings = names.flatMap((name) => {
    const parsed = askedPairing.safeParse(JSON.parse(readFileSync(new URL(name, folder), 'utf8')));
    return parsed.success ? [1, 2, 5].map((count) => withCount(parsed.data, count)) : [];
  });
  const real: RealVerdict[] = [];
  for (const asked of pairings) {
    const completion = completePairing(asked);
    const { pairing, options } = toModel(completion);
    const judged = await directSimulation.judge(pairing, options);
    if (!judged.ok) continue;
    const row = verdictRowOf('0'.repeat(64), completion, judged.value, new Date(FIRST_AT));
    real.push({ grade: row.grade, summary: row.summary, evidence: writeEvidence(row), json: row, asked });
  }
  return real;
}

function withCount(pairing: AskedPairing, count: number): AskedPairing {
  const [first, ...others] = pairing.lamps;
  return first === undefined ? pairing : { ...pairing, lamps: [{ ...first, count }, ...others] };
}

/** Verdict n is of dimmer n mod D and lamp n div D mod L. Every 20th is at 120 V, every 10th of an old model, those of every 25th dimmer stale. */
export function fillRecord(record: RecordDatabase, rows: number, real: readonly RealVerdict[], progress: (done: number) => void): void {
  const { dimmers, lamps } = catalogueFor(rows);
  const { entries } = storesOf(record);
  const at = new Date(FIRST_AT);
  const sample = (number: number): RealVerdict => {
    const verdict = real[number % real.length];
    if (verdict === undefined) throw new Error('There are no real verdicts to fill the record with.');
    return verdict;
  };
  entries.together(() => {
    for (let number = 0; number < dimmers; number += 1) {
      const entry = { name: `Dimmer ${number}, floor ${number % 4}`, tags: [`floor-${number % 4}`], dimmer: sample(number).asked.dimmer };
      putEntry(entries, dimmerId(number), { kind: 'dimmer', entry }, { kind: 'whatever' }, at);
    }
    for (let number = 0; number < lamps; number += 1) {
      const group = sample(number).asked.lamps[0];
      if (group === undefined) throw new Error('An example has no lamps.');
      const entry = { name: `Lamp ${number}, room ${number % 30}`, tags: [`room-${number % 30}`], lamp: group.lamp };
      putEntry(entries, lampId(number), { kind: 'lamp', entry }, { kind: 'whatever' }, at);
    }
  });

  const insertVerdict = record.prepare(
    `INSERT INTO verdicts (id, fingerprint, model_version, created_at, grade, summary, mains_voltage, mains_frequency, lamp_count)
     VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?)`,
  );
  const insertEvidence = record.prepare('INSERT INTO evidence (verdict, encoding, content) VALUES (?, ?, ?)');
  const insertPair = record.prepare(
    `INSERT INTO judged_pairs (verdict, created_at, circuit_row, dimmer, dimmer_revision, lamp, lamp_revision, lamp_count, plain, stale)
     VALUES (@seq, @at, @seq, @dimmer, 1, @lamp, 1, @count, 1, @stale)`,
  );
  const insertSome = record.transaction((from: number, to: number) => {
    for (let number = from; number < to; number += 1) {
      const { grade, summary, evidence } = sample(number);
      const dimmer = number % dimmers;
      const lamp = Math.floor(number / dimmers) % lamps;
      const count = 1 + Math.floor(number / dimmers / lamps);
      const createdAt = FIRST_AT + number * APART;
      const [voltage, frequency] = number % 20 === 7 ? [120, 60] : [230, 50];
      const version = number % 10 === 3 ? OLD_VERSION : MODEL_VERSION;
      const fingerprint = fingerprintOf(number);
      const id = fingerprint.toString('hex').slice(0, 26);
      insertVerdict.run(id, fingerprint, version, createdAt, grade, summary, voltage, frequency, count);
      insertEvidence.run(number + 1, evidence.encoding, evidence.content);
      const stale = dimmer % 25 === 3 ? 1 : 0;
      // Entries are numbered as they were put: dimmers first.
      insertPair.run({ seq: number + 1, at: createdAt, dimmer: dimmer + 1, lamp: dimmers + lamp + 1, count, stale });
    }
  });
  const batch = 20_000;
  for (let from = 0; from < rows; from += batch) {
    insertSome.immediate(from, Math.min(rows, from + batch));
    progress(Math.min(rows, from + batch));
  }
  record.pragma('wal_checkpoint(TRUNCATE)');
}
