/**
 * Judges a lamp list against a shelf of dimmers from a terminal: `npm run screen -- --lamps FILE --dimmers FILE --out FILE`. It is the
 * service's own screening on a record of its own, which stands beside the results until they are whole; interrupted, the same command
 * goes on with it.
 */
import { createHash } from 'node:crypto';
import { createReadStream, createWriteStream, existsSync, renameSync, rmSync } from 'node:fs';
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import pino from 'pino';
import { closeRecord, openRecord, type RecordDatabase } from '../db/record.ts';
import { type Stores, storesOf } from '../db/stores.ts';
import { parseEnvironment } from '../server/environment.ts';
import { resumeImports } from '../server/imports/importing.ts';
import { judgingQueue } from '../server/queue/engine-choice.ts';
import type { ScreeningAnswer } from '../server/schemas/screening.ts';
import { type ResultRow, resultsCsv, resultsNdjson, screeningResults } from '../server/screenings/screening-results.ts';
import { screeningService } from '../server/screenings/screening-service.ts';
import type { Screenings } from '../server/screenings/screenings.ts';
import { startSimulationPool } from '../server/simulation/simulation-pool.ts';
import { readScreenArguments, SCREEN_USAGE, type ScreenArguments } from './screen-arguments.ts';
import { type Complaint, takeList } from './screening-list.ts';
import { durationOf, screeningProgress, untilNextLook } from './screening-progress.ts';
import { wrap } from './terminal-text.ts';

const GIVEN_UP = 1;
const NOT_BEGUN = 2;
const INTERRUPTED = 130;
/** ms between two looks at how far it is */
const LOOK = 250;
/** failures that are named in the terminal; the results name all */
const NAMED = 5;

const now = (): Date => new Date();
const read = readScreenArguments(process.argv.slice(2));
if (read.ok) {
  process.exitCode = await screen(read.asked);
} else if (read.help) {
  process.stdout.write(SCREEN_USAGE);
} else {
  process.exitCode = complain(read.complaint);
  process.stderr.write(`\n${SCREEN_USAGE}`);
}

async function screen(asked: ScreenArguments): Promise<number> {
  const partial = `${asked.out.file}.partial`;
  const missing = [asked.lamps.file, asked.dimmers.file].filter((file) => !existsSync(file));
  if (missing.length > 0) return complain(missing.map((file) => `there is no file ${file}`));
  const mark = await markOf(asked);
  const isNew = !existsSync(partial);
  const record = openRecord(partial, now);
  try {
    if (!isNew && markIn(record) !== 0 && markIn(record) !== mark) {
      return complain([`${partial} is of other lists or options: give the same ones again to go on, or delete it to begin anew`]);
    }
    const stores = storesOf(record);
    const complaint = markIn(record) === mark ? [] : await begin(stores, asked);
    if (complaint.length > 0) {
      closeRecord(record);
      remove(partial);
      return complain(complaint);
    }
    const ended = await run(stores, asked, () => record.pragma(`user_version = ${mark}`));
    if (ended === undefined) return INTERRUPTED;
    if (typeof ended === 'number') return ended;
    await writeResults(stores, ended, asked);
    closeRecord(record);
    remove(partial);
    return ended.counts.failed === 0 ? 0 : GIVEN_UP;
  } finally {
    closeRecord(record);
  }
}

/** What the lists and options are, in 31 bits that the record carries: enough to notice that they are others. Never 0. */
async function markOf({ lamps, dimmers, screening }: ScreenArguments): Promise<number> {
  const hash = createHash('sha256').update(JSON.stringify([lamps.type, dimmers.type, screening]));
  for (const { file } of [lamps, dimmers]) for await (const chunk of createReadStream(file)) hash.update(chunk as Buffer);
  return (hash.digest().readUInt32BE() >>> 1) | 1;
}

function markIn(record: RecordDatabase): number {
  return record.pragma('user_version', { simple: true }) as number;
}

/** Takes both lists in; one that broke off before is simply taken in again. */
async function begin(stores: Stores, { lamps, dimmers }: ScreenArguments): Promise<Complaint> {
  await resumeImports({ entries: stores.entries, staging: stores.importStaging, now });
  return [...(await takeList(stores, 'lamp', lamps)), ...(await takeList(stores, 'dimmer', dimmers))];
}

/** The screening as it ended; undefined where it was interrupted; an exit code where it could not begin. */
async function run(stores: Stores, asked: ScreenArguments, setMark: () => void): Promise<ScreeningAnswer | undefined | number> {
  const parsed = parseEnvironment(process.env);
  if (!parsed.ok) return complain(parsed.problems);
  const { workers, queueLimit, pairingDeadline_s } = parsed.environment;
  const simulation = startSimulationPool({ threads: workers, queueLimit, backgroundDeadline_s: pairingDeadline_s });
  const queue = await judgingQueue(parsed.environment, simulation);
  const { screenings } = screeningService({ stores, queue, now, logger: pino({ level: 'silent' }) });
  try {
    const id = await screeningId(screenings, asked);
    if (typeof id !== 'string') return complain(id);
    setMark();
    return await follow(screenings, id);
  } finally {
    await screenings.stop();
    await simulation.destroy();
  }
}

/** The one screening of the record, asked for where it is not there yet. */
async function screeningId(screenings: Screenings, { screening }: ScreenArguments): Promise<string | Complaint> {
  const [known] = await screenings.page(Number.MAX_SAFE_INTEGER, 1);
  if (known !== undefined) return known.screening.id;
  const answer = await screenings.ask(screening);
  return answer.ok ? answer.screening.id : answer.issues.map(({ path, message }) => `${path} ${message}`);
}

async function follow(screenings: Screenings, id: string): Promise<ScreeningAnswer | undefined> {
  const stop = new AbortController();
  const interrupt = (): void => {
    if (stop.signal.aborted) process.exit(INTERRUPTED);
    stop.abort();
    process.stderr.write('\nFinishing what runs; once more ends at once.\n');
  };
  process.on('SIGINT', interrupt);
  process.on('SIGTERM', interrupt);
  const progress = screeningProgress(process.stderr);
  const began = Date.now();
  try {
    screenings.start();
    for (;;) {
      const screening = await look(screenings, id);
      progress.show(screening);
      if (screening.endedAt !== null) {
        progress.end();
        summarize(screening, (Date.now() - began) / 1000);
        return screening;
      }
      await untilNextLook(LOOK, stop.signal);
      if (!stop.signal.aborted) continue;
      await screenings.stop();
      const { counts } = await look(screenings, id);
      progress.end();
      process.stderr.write(`Interrupted: ${counts.toGo} of ${counts.total} are left. The same command goes on.\n`);
      return undefined;
    }
  } finally {
    process.off('SIGINT', interrupt);
    process.off('SIGTERM', interrupt);
  }
}

async function look(screenings: Screenings, id: string): Promise<ScreeningAnswer> {
  const screening = await screenings.read(id);
  if (screening === undefined) throw new Error('The screening is no longer in its record.');
  return screening;
}

function summarize({ counts, selected }: ScreeningAnswer, took_s: number): void {
  const what = `${counts.total} pairings of ${selected.lamps} lamps and ${selected.dimmers} dimmers`;
  process.stderr.write(`${what}: ${counts.done + counts.stored} judged, ${counts.failed} given up, in ${durationOf(took_s)}.\n`);
}

/** Whole or not at all: a file under its name is never half of the results. */
async function writeResults(stores: Stores, { id, counts }: ScreeningAnswer, { out }: ScreenArguments): Promise<void> {
  const row = stores.screenings.find(id);
  if (row === undefined) throw new Error('The screening is no longer in its record.');
  const results = named(screeningResults(stores, row), counts.failed);
  const unfinished = `${out.file}.writing`;
  await pipeline(Readable.from(out.form === 'csv' ? resultsCsv(results) : resultsNdjson(results)), createWriteStream(unfinished));
  renameSync(unfinished, out.file);
}

/** Names the first that were given up on the way through. */
async function* named(results: AsyncIterable<readonly ResultRow[]>, failed: number): AsyncGenerator<readonly ResultRow[]> {
  let left = NAMED;
  for await (const rows of results) {
    for (const { outcome, lampId, dimmerId, count, summary } of rows) {
      if (outcome !== 'failed' || left === 0) continue;
      left -= 1;
      process.stderr.write(`${wrap(`given up: ${count} x ${lampId} on ${dimmerId}: ${summary}`).join('\n')}\n`);
    }
    yield rows;
  }
  if (failed > NAMED) process.stderr.write(`and ${failed - NAMED} more, which the results name\n`);
}

function remove(partial: string): void {
  for (const file of [partial, `${partial}-wal`, `${partial}-shm`]) rmSync(file, { force: true });
}

function complain([heading = '', ...particulars]: Complaint): number {
  const lines = [`screen: ${heading}`, ...particulars.flatMap((line) => wrap(line, '  '))];
  process.stderr.write(`${lines.join('\n')}\n`);
  return NOT_BEGUN;
}
