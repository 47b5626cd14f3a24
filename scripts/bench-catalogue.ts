/**
 * Measures how fast the catalogue answers. First, requests a second of a stored badge, a stored verdict and a 304, each against a bare
 * Fastify route that answers a constant of the same size, in turns. Then the 99th percentile of every query with many stored verdicts
 * against few, in turns too. The records are made in a temporary folder and deleted.
 *
 *   npm run bench:catalogue [-- --rows 1000000 --few 10000 --rounds 5 --seconds 4 --requests 1000]
 */
import { spawn } from 'node:child_process';
import { mkdtempSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createInterface } from 'node:readline';
import { parseArgs } from 'node:util';
import { closeRecord, openRecord } from '../db/record.ts';
import { figure, machineLine, spreadOf } from './bench-figures.ts';
import { catalogueFor, dimmerId, fillRecord, lampId, realVerdicts, verdictIdOf } from './catalogue-filling.ts';
import { QUERIES, type Query } from './catalogue-queries.ts';
import { requestsPerSecond } from './load-generator.ts';
import { type ServiceProcess, startService } from './service-process.ts';

const { values } = parseArgs({
  options: {
    rows: { type: 'string', default: '1000000' },
    few: { type: 'string', default: '10000' },
    rounds: { type: 'string', default: '5' },
    seconds: { type: 'string', default: '4' },
    requests: { type: 'string', default: '1000' },
  },
});
const [rows, few, rounds, seconds, requests] = [values.rows, values.few, values.rounds, values.seconds, values.requests].map(Number) as [
  number,
  number,
  number,
  number,
  number,
];

const folder = mkdtempSync(join(tmpdir(), 'holdfast-bench-'));
try {
  console.log(machineLine());
  const many = join(folder, 'many');
  const small = join(folder, 'few');
  makeRecords([
    [small, few],
    [many, rows],
  ]);
  const services = [await startService(small), await startService(many)] as const;
  await compareThroughput(services[1]);
  await compareLatency(services);
  for (const service of services) await service.stop();
} finally {
  rmSync(folder, { recursive: true, force: true });
}

function makeRecords(records: readonly (readonly [folder: string, rows: number])[]): void {
  const real = realVerdicts();
  for (const [data, wanted] of records) {
    const began = performance.now();
    const file = join(data, 'holdfast.sqlite');
    const record = openRecord(file, () => new Date());
    fillRecord(record, wanted, real, () => undefined);
    closeRecord(record);
    const { dimmers, lamps } = catalogueFor(wanted);
    const bytes = statSync(file).size;
    console.log(
      `\n${figure(wanted)} verdicts of ${figure(dimmers)} dimmers and ${figure(lamps)} lamps, made in ${figure((performance.now() - began) / 1000)} s: ` +
        `${figure(bytes / 1e6)} MB, ${figure(bytes / wanted)} bytes a verdict, all tables and indexes`,
    );
  }
}

async function compareThroughput({ address }: ServiceProcess): Promise<void> {
  const badge = `${address}/v1/badges/${dimmerId(0)}/${lampId(0)}.svg?count=1`;
  const verdict = `${address}/v1/verdicts/${verdictIdOf(0)}`;
  const sizeOf = async (url: string) => (await (await fetch(url)).arrayBuffer()).byteLength;
  const tagOf = async (url: string) => (await fetch(url)).headers.get('etag') ?? '';
  const [badgeSize, verdictSize] = [await sizeOf(badge), await sizeOf(verdict)];
  const bare = await startBareRoutes([`image/svg+xml:${badgeSize}`, `application/json:${verdictSize}`]);

  const rounds304 = ['if-none-match', await tagOf(badge)].join('=');
  const verdict304 = ['if-none-match', await tagOf(verdict)].join('=');
  const contests = [
    { name: `badge, ${badgeSize} bytes`, url: badge, status: 200, headers: [], against: 0, least: 0.7 },
    { name: `verdict, ${verdictSize} bytes`, url: verdict, status: 200, headers: [], against: 1, least: 0.7 },
    { name: 'badge, 304', url: badge, status: 304, headers: [rounds304], against: 0, least: 0.85 },
    { name: 'verdict, 304', url: verdict, status: 304, headers: [verdict304], against: 1, least: 0.85 },
  ];
  console.log(
    `\nRequests a second, ${rounds} rounds of ${seconds} s in turns, 10 connections from a process of its own: median (least to most)`,
  );
  for (const { url, status, headers } of contests) await requestsPerSecond(url, 2, status, headers);
  for (const { name, url, status, headers, against, least } of contests) {
    const [bares, ours, ratios]: [number[], number[], number[]] = [[], [], []];
    for (let round = 0; round < rounds; round += 1) {
      const bareRate = await requestsPerSecond(`${bare.address}/${against}`, seconds, 200);
      const rate = await requestsPerSecond(url, seconds, status, headers);
      bares.push(bareRate);
      ours.push(rate);
      ratios.push(rate / bareRate);
    }
    const ratio = spreadOf(ratios);
    console.log(
      `  ${name.padEnd(24)} ${spread(ours).padEnd(28)} bare ${spread(bares).padEnd(28)} ratio ${percent(ratio.median)} ` +
        `(${percent(ratio.least)} to ${percent(ratio.most)}), wanted ${percent(least)}: ${ratio.median >= least ? 'met' : 'MISSED'}`,
    );
  }
  bare.stop();
}

async function compareLatency(services: readonly [ServiceProcess, ServiceProcess]): Promise<void> {
  console.log(
    `\nMilliseconds an answer, one request at a time, ${figure(few)} against ${figure(rows)} verdicts in turns; wanted: p99 at most twice`,
  );
  console.log(
    `  ${'query'.padEnd(44)}${'few: median'.padStart(12)}${'p99'.padStart(8)}${'many: median'.padStart(14)}${'p99'.padStart(8)}${'p99 ratio'.padStart(11)}`,
  );
  for (const query of QUERIES) {
    const wanted = Math.max(100, Math.round(requests * (query.share ?? 1)));
    const times: [number[], number[]] = [[], []];
    for (let number = -20; number < wanted; number += 1) {
      for (const [index, service] of services.entries()) {
        const time = await timeOf(query, service.address, index === 0 ? few : rows);
        if (number >= 0) times[index]?.push(time);
      }
    }
    const [fewTimes, manyTimes] = times.map(percentiles) as [Percentiles, Percentiles];
    const ratio = manyTimes.p99 / fewTimes.p99;
    const cells = [fewTimes.median, fewTimes.p99, manyTimes.median, manyTimes.p99].map((value) => value.toFixed(2));
    console.log(
      `  ${query.name.padEnd(44)}${cells[0]?.padStart(12)}${cells[1]?.padStart(8)}${cells[2]?.padStart(14)}${cells[3]?.padStart(8)}${ratio.toFixed(2).padStart(11)} ${ratio <= 2 ? '' : 'MISSED'}`,
    );
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

async function startBareRoutes(routes: readonly string[]): Promise<{ readonly address: string; readonly stop: () => void }> {
  const script = new URL('./bare-route.ts', import.meta.url).pathname;
  const child = spawn(process.execPath, ['--import', 'tsx', script, ...routes], { stdio: ['ignore', 'pipe', 'inherit'] });
  for await (const line of createInterface({ input: child.stdout })) return { address: line, stop: () => void child.kill('SIGTERM') };
  throw new Error('The bare routes did not start.');
}

function spread(found: readonly number[]): string {
  const { median, least, most } = spreadOf(found);
  return `${figure(median)} (${figure(least)} to ${figure(most)})`;
}

function percent(share: number): string {
  return `${Math.round(share * 100)} %`;
}
