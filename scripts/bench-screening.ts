/**
 * Measures screenings: pairings an hour against a bare loop, over Redis and with two workers; kills at random moments; memory over what is
 * stored already; verdicts and badges meanwhile; and how long a whole night's list takes.
 *
 *   npm run bench:screening [-- --parts throughput,kills,memory,latency,night --rounds 3 --lamps 10 --dimmers 6 --kills 50 --stored 1000000
 *     --requests 1000 --sample 60]
 */
import { spawnSync } from 'node:child_process';
import { parseArgs } from 'node:util';
import { figure, machineLine } from './bench-figures.ts';
import { measureLatency } from './screening-latency.ts';
import { measureMemory } from './screening-memory.ts';
import { reckonNight } from './screening-night.ts';
import { measureThroughput } from './screening-throughput.ts';
import { runTrial } from './screening-trial.ts';

const whole = (fallback: string) => ({ type: 'string', default: fallback }) as const;
const { values } = parseArgs({
  options: {
    parts: whole('throughput,kills,memory,latency,night'),
    rounds: whole('3'),
    lamps: whole('10'),
    dimmers: whole('6'),
    kills: whole('50'),
    stored: whole('1000000'),
    requests: whole('1000'),
    sample: whole('60'),
  },
});
const parts = values.parts.split(',');

console.log(machineLine());
if (parts.includes('throughput')) {
  const redis = spawnSync('redis-server', ['--version']).status === 0;
  if (!redis) console.log('redis-server is not installed: what goes over Redis is left out');
  await measureThroughput({ lamps: Number(values.lamps), dimmers: Number(values.dimmers), rounds: Number(values.rounds), redis });
}
if (parts.includes('kills')) await killAtRandom(Number(values.kills));
if (parts.includes('memory')) await measureMemory(Number(values.stored));
if (parts.includes('latency')) await measureLatency(Number(values.requests));
if (parts.includes('night')) await reckonNight(Number(values.sample));

async function killAtRandom(kills: number): Promise<void> {
  const size = { lamps: 50, dimmers: 40 };
  const pairings = size.lamps * size.dimmers;
  const seed = Date.now() % 1_000_000;
  console.log(`\n${kills} kills at random moments (seed ${seed}) of a screening of ${figure(pairings)} pairings`);
  const undisturbed = await runTrial({ ...size, kills: 0, seed });
  const killed = await runTrial({ ...size, kills, seed });
  const { counts, verdicts } = killed;
  const lines = killed.csv.trimEnd().split('\r\n').slice(1);
  const named = new Set(lines.map((line) => line.split(',').slice(0, 3).join(',')));
  console.log(
    `  killed ${killed.kills} times${killed.kills < kills ? ', after which it was done' : ''}; ${pairings - named.size} lost, ${lines.length - named.size + (verdicts - pairings)} doubled`,
  );
  console.log(`  counts: ${JSON.stringify(counts)}`);
  const isSame = killed.csv === undisturbed.csv;
  console.log(`  the results are ${isSame ? 'byte for byte those' : 'NOT those'} of an undisturbed run`);
  if (!isSame || counts.done !== pairings) process.exitCode = 1;
}
