/**
 * Has a service of its own screen a small invented catalogue, and kills it again and again at random moments: for the tests and the
 * bench, which hold what comes out against an undisturbed run.
 */
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { openRecord } from '../db/record.ts';
import type { ScreeningAnswer } from '../server/schemas/screening.ts';
import { type ServiceProcess, startService } from './service-process.ts';

export interface TrialSize {
  readonly lamps: number;
  readonly dimmers: number;
}

export interface Trial extends TrialSize {
  readonly kills: number;
  /** of the random moments */
  readonly seed: number;
  readonly variables?: { readonly [name: string]: string };
  /** what else is killed in turn with the service: it kills and starts again */
  readonly alsoKill?: () => Promise<void>;
  readonly onKill?: (kill: number, counts: ScreeningAnswer['counts']) => void;
}

export interface TrialOutcome {
  /** as the service gives it */
  readonly csv: string;
  readonly counts: ScreeningAnswer['counts'];
  readonly kills: number;
  /** rows of the record when all was over */
  readonly verdicts: number;
  readonly pairs: number;
}

/** ms between two looks at how far it is */
const LOOK = 25;

export async function runTrial({ lamps, dimmers, kills, seed, variables = {}, alsoKill, onKill }: Trial): Promise<TrialOutcome> {
  const folder = mkdtempSync(join(tmpdir(), 'holdfast-trial-'));
  const random = randomNumbers(seed);
  let service: ServiceProcess | undefined;
  try {
    service = await startService(folder, variables);
    await fillCatalogue(service.address, { lamps, dimmers });
    const id = await ask(service.address);
    let killed = 0;
    // pairings that were judged beyond all targets, while nobody looked: so many more will be before each further kill
    let overrun = 0;
    for (let target = 0; ; ) {
      const { state, counts } = await read(service.address, id);
      if (state === 'finished') break;
      if (state === 'cancelled') throw new Error('The screening was cancelled by nobody.');
      if (killed < kills && counts.done >= target) {
        await new Promise((resolve) => setTimeout(resolve, random() * 40));
        if (alsoKill !== undefined && random() < 0.5) {
          await alsoKill();
        } else {
          await service.kill();
          service = await startService(folder, variables);
        }
        killed += 1;
        onKill?.(killed, counts);
        overrun += counts.done - target;
        // Spread over what is left, so that each kill meets it at work.
        const left = kills - killed;
        const room = Math.max(0, counts.toGo - (left * overrun) / killed);
        target = counts.done + (random() * room) / (left + 1);
      }
      await new Promise((resolve) => setTimeout(resolve, LOOK));
    }
    const { counts } = await read(service.address, id);
    const csv = await results(service.address, id);
    await service.stop();
    return { csv, counts, kills: killed, ...rowsOf(folder) };
  } finally {
    await service?.kill();
    rmSync(folder, { recursive: true, force: true });
  }
}

async function fillCatalogue(address: string, { lamps, dimmers }: TrialSize): Promise<void> {
  for (let index = 0; index < lamps; index += 1) {
    const lamp = { ratedPower_W: 25, load: { kind: 'resistive', resistance_Ohm: 500 + 10 * index } };
    await send('PUT', `${address}/v1/lamps/room-${index}`, { name: `Lamp of room ${index}`, lamp });
  }
  for (let index = 0; index < dimmers; index += 1) {
    const dimmer = { latchingCurrent_mA: 50, holdingCurrent_mA: 30, turnOffTime_us: index };
    await send('PUT', `${address}/v1/dimmers/wall-${index}`, { name: `Dimmer of wall ${index}`, dimmer });
  }
}

/** One dial position at the nominal corner: cheap, and from a fresh start. */
async function ask(address: string): Promise<string> {
  const answer = await send('POST', `${address}/v1/screenings`, {
    lamps: { all: true },
    dimmers: { all: true },
    mains: { voltage_V: 230, frequency_Hz: 50 },
    options: { dialPositions_pct: [70], corners: 'nominal' },
  });
  return ((await answer.json()) as ScreeningAnswer).id;
}

async function read(address: string, id: string): Promise<ScreeningAnswer> {
  return (await send('GET', `${address}/v1/screenings/${id}`)).json() as Promise<ScreeningAnswer>;
}

async function results(address: string, id: string): Promise<string> {
  return (await fetch(`${address}/v1/screenings/${id}/results`, { headers: { accept: 'text/csv' } })).text();
}

async function send(method: string, url: string, body?: unknown): Promise<Response> {
  const answer = await fetch(url, {
    method,
    ...(body === undefined ? {} : { headers: { 'content-type': 'application/json' }, body: JSON.stringify(body) }),
  });
  if (!answer.ok) throw new Error(`${method} ${url} was answered ${answer.status}: ${await answer.text()}`);
  return answer;
}

function rowsOf(folder: string): Pick<TrialOutcome, 'verdicts' | 'pairs'> {
  const record = openRecord(join(folder, 'holdfast.sqlite'), () => new Date());
  try {
    const count = (table: string) => record.prepare<[], number>(`SELECT count(*) FROM ${table}`).pluck().get() ?? 0;
    return { verdicts: count('verdicts'), pairs: count('judged_pairs') };
  } finally {
    record.close();
  }
}

/** mulberry32 (public domain): good enough to choose moments by, and the same again for the same seed */
function randomNumbers(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let mixed = Math.imul(state ^ (state >>> 15), state | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32;
  };
}
