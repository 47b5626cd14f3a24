/**
 * Measures how fast the catalogue answers. First, requests a second of a stored badge, a stored verdict and a 304, each against a bare
 * Fastify route that answers a constant of the same size, in turns. Then the 99th percentile of every query with many stored verdicts
 * against few, in turns too. Processor time stands beside both: it tells more where other work shares the machine. The records are made
 * in a temporary folder and deleted.
 *
 *   npm run bench:catalogue [-- --parts throughput,latency --rows 1000000 --few 10000 --rounds 15 --seconds 2 --requests 1000
 *     --keep FOLDER]
 */
import { spawn } from 'node:child_process';
import { existsSync, mkdtempSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createInterface } from 'node:readline';
import { parseArgs } from 'node:util';
import { closeRecord, openRecord } from '../db/record.ts';
import { figure, machineLine, type Spread, spreadOf } from './bench-figures.ts';
import { catalogueFor, dimmerId, fillRecord, lampId, realVerdicts, verdictIdOf } from './catalogue-filling.ts';
import { QUERIES, type Query } from './catalogue-queries.ts';
import { type Load, loadOn, processorTime_s } from './load-generator.ts';
import { type ServiceProcess, startService } from './service-process.ts';

const { values } = parseArgs({
  options: {
    parts: { type: 'string', default: 'throughput,latency' },
    rows: { type: 'string', default: '1000000' },
    few: { type: 'string', default: '10000' },
    rounds: { type: 'string', default: '15' },
    seconds: { type: 'string', default: '2' },
    requests: { type: 'string', default: '1000' },
    keep: { type: 'string' },
  },
});
const [rows, few, rounds, seconds, requests] = [values.rows, values.few, values.rounds, values.seconds, values.requests].map(Number) as [
  number,
  number,
  number,
  number,
  number,
];
const parts = values.parts.split(',');

const folder = values.keep ?? mkdtempSync(join(tmpdir(), 'holdfast-bench-'));
const services: ServiceProcess[] = [];
try {
  console.log(machineLine());
  const many = join(folder, 'many');
  const small = join(folder, 'few');
  await makeRecords([
    [small, few],
    [many, rows],
  ]);
  const atFew = await startService(small);
  services.push(atFew);
  const atMany = await startService(many);
  services.push(atMany);
  if (parts.includes('throughput')) await compareThroughput(atMany);
  if (parts.includes('latency')) await compareLatency([atFew, atMany]);
} finally {
  for (const service of services) await service.stop();
  if (values.keep === undefined) rmSync(folder, { recursive: true, force: true });
}

async function makeRecords(records: readonly (readonly [folder: string, rows: number])[]): Promise<void> {
  for (const [data, wanted] of records) {
    const began = performance.now();
    const file = join(data, 'holdfast.sqlite');
    const isThere = existsSync(file);
    const record = openRecord(file, () => new Date());
    if (!isThere) fillRecord(record, wanted, await realVerdicts(), () => undefined);
    closeRecord(record);
    const { dimmers, lamps } = catalogueFor(wanted);
    const bytes = statSync(file).size;
    console.log(
      `\n${figure(wanted)} verdicts of ${figure(dimmers)} dimmers and ${figure(lamps)} lamps, ${isThere ? 'made before' : `made in ${figure((performance.now() - began) / 1000)} s`}: ` +
        `${figure(bytes / 1e6)} MB, ${figure(bytes / wanted)} bytes a verdict, all tables and indexes`,
    );
  }
}

async function compareThroughput({ address, pid }: ServiceProcess): Promise<void> {
  const badge = `${address}/v1/badges/${dimmerId(0)}/${lampId(0)}.svg?count=1`;
  const verdict = `${address}/v1/verdicts/${verdictIdOf(0)}`;
  const sizeOf = async (url: string) => (await (await fetch(url)).arrayBuffer()).byteLength;
  const tagOf = async (url: string) => (await fetch(url)).headers.get('etag') ?? '';
  const [badgeSize, verdictSize] = [await sizeOf(badge), await sizeOf(verdict)];
  const bare = await startBareRoutes([`image/svg+xml:${badgeSize}`, `application/json:${verdictSize}`]);

  const rounds304 = ['if-none-match', await tagOf(badge)].join('=');
  const verdict304 = ['if-none-match', await tagOf(verdict)].join('=');
  try {
    const contests = [
      { name: `badge, ${badgeSize} bytes`, url: badge, status: 200, headers: [], against: 0, least: 0.7 },
      { name: `verdict, ${verdictSize} bytes`, url: verdict, status: 200, headers: [], against: 1, least: 0.7 },
      { name: 'badge, 304', url: badge, status: 304, headers: [rounds304], against: 0, least: 0.85 },
      { name: 'verdict, 304', url: verdict, status: 304, headers: [verdict304], against: 1, least: 0.85 },
    ];
    console.log(
      `\nRequests a second, ${rounds} rounds of ${seconds} s in turns, 10 connections from a process of its own: median (least to most)`,
    );
    for (const { url, status, headers, against } of contests) {
      await loadOn(url, pid, 2, status, headers);
      await loadOn(`${bare.address}/${against}`, bare.pid, 2, 200);
    }
    for (const { name, url, status, headers, against, least } of contests) {
      const turns: (readonly [ours: Load, bare: Load])[] = [];
      for (let round = 0; round < rounds; round += 1) {
        const bareLoad = await loadOn(`${bare.address}/${against}`, bare.pid, seconds, 200);
        turns.push([await loadOn(url, pid, seconds, status, headers), bareLoad]);
      }
      const rate = spreadOf(turns.map(([ours, theirs]) => ours.perSecond / theirs.perSecond));
      const effort = spreadOf(turns.map(([ours, theirs]) => theirs.processor_us / ours.processor_us));
      console.log(
        `  ${name.padEnd(24)} ${spread(turns.map(([ours]) => ours.perSecond)).padEnd(28)} bare ${spread(turns.map(([, theirs]) => theirs.perSecond)).padEnd(28)} ` +
          `ratio ${percents(rate)}, wanted ${percent(least)}: ${rate.median >= least ? 'met' : 'MISSED'}; by processor time ${percents(effort)}`,
      );
    }
  } finally {
    bare.stop();
  }
}

async function compareLatency(services: readonly [ServiceProcess, ServiceProcess]): Promise<void> {
  const row = (name: string, cells: readonly string[]) =>
    console.log(`  ${name.padEnd(42)}${cells.map((cell) => cell.padStart(10)).join('')}`);
  console.log(
    `\nMilliseconds an answer, one request at a time, with ${figure(few)} and with ${figure(rows)} verdicts in turns; wanted: p99 at most twice`,
  );
  row('', ['median', '', 'p99', '', 'p99 ratio', 'processor', '']);
  for (const query of QUERIES) {
    const wanted = Math.max(100, Math.round(requests * (query.share ?? 1)));
    const times: [number[], number[]] = [[], []];
    const effort = [0, 0];
    for (let number = -20; number < wanted; number += 1) {
      if (number === 0) for (const [index, { pid }] of services.entries()) effort[index] = -processorTime_s(pid);
      for (const [index, service] of services.entries()) {
        const time = await timeOf(query, service.address, index === 0 ? few : rows);
        if (number >= 0) times[index]?.push(time);
      }
    }
    const processor = services.map(({ pid }, index) => (((effort[index] ?? 0) + processorTime_s(pid)) / wanted) * 1000);
    const [fewTimes, manyTimes] = times.map(percentiles) as [Percentiles, Percentiles];
    const ratio = manyTimes.p99 / fewTimes.p99;
    const cells = [fewTimes.median, manyTimes.median, fewTimes.p99, manyTimes.p99, ratio, ...processor].map((value) => value.toFixed(2));
    row(query.name, [...cells, ratio <= 2 ? '' : 'MISSED']);
  }
}

async function timeOf(query: Query, address: string, stored: number): Promise<number> {
  const { path, body, accept } = query.ask(stored);
  const init =
    body === undefined
      ? { headers: { accept: accept ?? 'application/json' } }
      : { method: 'POST', headers: { 'content-type': 'application/json' }, body: JSON.stringify(body) };
  const began = performance.now();
  const answer = await fetch(address + path, init);
  await answer.arrayBuffer();
  const time = performance.now() - began;
  if (answer.status !== 200) throw new Error(`${path} was answered ${answer.status}.`);
  return time;
}

interface Percentiles {
  readonly median: number;
  readonly p99: number;
}

function percentiles(times: readonly number[]): Percentiles {
  const sorted = [...times].sort((a, b) => a - b);
  const at = (share: number) => sorted[Math.min(sorted.length - 1, Math.floor(sorted.length * share))] ?? Number.NaN;
  return { median: at(0.5), p99: at(0.99) };
}

async function startBareRoutes(
  routes: readonly string[],
): Promise<{ readonly address: string; readonly pid: number; readonly stop: () => void }> {
  const script = new URL('./bare-route.ts', import.meta.url).pathname;
  const child = spawn(process.execPath, ['--import', 'tsx', script, ...routes], { stdio: ['ignore', 'pipe', 'inherit'] });
  for await (const line of createInterface({ input: child.stdout }))
    return { address: line, pid: child.pid ?? 0, stop: () => void child.kill('SIGTERM') };
  throw new Error('The bare routes did not start.');
}

function spread(found: readonly number[]): string {
  const { median, least, most } = spreadOf(found);
  return `${figure(median)} (${figure(least)} to ${figure(most)})`;
}

function percents({ median, least, most }: Spread): string {
  return `${percent(median)} (${percent(least)} to ${percent(most)})`;
}

function percent(share: number): string {
  return `${Math.round(share * 100)} %`;
}
