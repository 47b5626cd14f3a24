/** How long verdicts and badges take while a screening runs, against an idle service: the service in a process of its own, one request at a time. */
import { figure } from './bench-figures.ts';
import { guestHouseDimmer, guestHouseLamp } from './guest-house-lists.ts';
import { inTemporaryFolder } from './screening-bench-parts.ts';
import { startService } from './service-process.ts';

const MAINS = { voltage_V: 230, frequency_Hz: 50 };
/** so many that the screening outlasts the measuring */
const LAMPS = 60;
const DIMMERS = 20;
/** requests that judge something new take as long as a simulation: fewer are enough, and tell less about the tail */
const NEW_SHARE = 20;

interface Call {
  readonly name: string;
  readonly requests: number;
  readonly send: (index: number) => Promise<Response>;
}

export async function measureLatency(requests: number): Promise<void> {
  console.log(`\nLatency while a screening runs: ${requests} requests of each kind, one at a time, one simulation thread`);
  await inTemporaryFolder(async (folder) => {
    const service = await startService(folder);
    try {
      await fill(service.address);
      const calls = await callsOf(service.address, requests);
      for (const call of calls) await percentilesOf({ ...call, requests: Math.ceil(call.requests / 10) }, 0);
      const idle = await measureAll(calls, 1);
      const screening = await send('POST', `${service.address}/v1/screenings`, {
        lamps: { all: true },
        dimmers: { all: true },
        mains: MAINS,
      });
      const { id } = (await screening.json()) as { id: string };
      const busy = await measureAll(calls, 2);
      const { state } = (await (await fetch(`${service.address}/v1/screenings/${id}`)).json()) as { state: string };
      if (state !== 'running') throw new Error(`The screening was ${state} before everything was measured.`);
      for (const [index, { name }] of calls.entries()) {
        console.log(`  ${name.padEnd(34)} idle ${idle[index]}; while it screens ${busy[index]}`);
      }
    } finally {
      await service.kill();
    }
  });
}

async function measureAll(calls: readonly Call[], phase: number): Promise<string[]> {
  const told: string[] = [];
  for (const call of calls) told.push(await percentilesOf(call, phase));
  return told;
}

/** `phase` keeps what is new in one measurement from being stored in the next. */
async function percentilesOf({ requests, send: sendOne }: Call, phase: number): Promise<string> {
  const took: number[] = [];
  for (let index = 0; index < requests; index += 1) {
    const began = performance.now();
    const answer = await sendOne(phase * 10_000 + index);
    await answer.arrayBuffer();
    took.push(performance.now() - began);
    if (!answer.ok) throw new Error(`${answer.url} was answered ${answer.status}.`);
  }
  took.sort((a, b) => a - b);
  const at = (share: number) => figure(took[Math.min(took.length - 1, Math.floor(share * took.length))] ?? Number.NaN);
  return `p50 ${at(0.5)} ms, p99 ${at(0.99)} ms`;
}

async function callsOf(address: string, requests: number): Promise<readonly Call[]> {
  const question = { mains: MAINS, dimmer: { dimmerId: 'dimmer-0' }, lamps: [{ lampId: 'lamp-0', count: 1 }] };
  const judged = (await (await send('POST', `${address}/v1/verdicts`, question)).json()) as { id: string };
  const brief = (index: number) => ({
    mains: MAINS,
    dimmer: { latchingCurrent_mA: 50, holdingCurrent_mA: 30 },
    lamps: [{ count: 1, lamp: { load: { kind: 'resistive', resistance_Ohm: 500 + index / 100 } } }],
    options: { dialPositions_pct: [70], corners: 'nominal' },
  });
  return [
    { name: 'GET a badge', requests, send: () => fetch(`${address}/v1/badges/dimmer-0/lamp-0.svg`) },
    { name: 'GET a stored verdict', requests, send: () => fetch(`${address}/v1/verdicts/${judged.id}`) },
    { name: 'POST a question that is stored', requests, send: () => send('POST', `${address}/v1/verdicts`, question) },
    {
      name: 'POST a new question, one position',
      requests: Math.ceil(requests / NEW_SHARE),
      send: (index) => send('POST', `${address}/v1/verdicts`, brief(index)),
    },
  ];
}

async function fill(address: string): Promise<void> {
  const list = (id: string, kind: string, length: number, make: (index: number) => object) =>
    Array.from({ length }, (_, index) => JSON.stringify({ id: `${id}-${index}`, [kind]: make(index) })).join('\n');
  for (const [path, body] of [
    ['lamps', list('lamp', 'lamp', LAMPS, guestHouseLamp)],
    ['dimmers', list('dimmer', 'dimmer', DIMMERS, guestHouseDimmer)],
  ] as const) {
    const answer = await fetch(`${address}/v1/imports/${path}?onError=stop`, {
      method: 'POST',
      headers: { 'content-type': 'application/x-ndjson' },
      body,
    });
    const report = await answer.text();
    if (!answer.ok || !/"refused":0/.test(report)) throw new Error(`The import was answered ${answer.status}: ${report.slice(0, 500)}`);
  }
}

function send(method: string, url: string, body: unknown): Promise<Response> {
  return fetch(url, { method, headers: { 'content-type': 'application/json' }, body: JSON.stringify(body) });
}
