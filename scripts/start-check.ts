/**
 * Starts the service for real, has it judge an example over HTTP, holds the answer against what this process computes, and stops it:
 * `node --import tsx scripts/start-check.ts`. Ends with 1 at the first thing that is not as it should be.
 */
import assert from 'node:assert/strict';
import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Verdict } from '../server/schemas/verdict.ts';
import { judgeInProcess } from './in-process-judging.ts';
import { readPairing } from './pairing-reading.ts';
import { startService } from './service-process.ts';

const EXAMPLE = new URL('./examples/breakfast-room.json', import.meta.url).pathname;
/** W: five lamps of 7 W, less what their curve draws below rated and what the dimmer cuts at full dial */
const FULL_DIAL_POWER = { least: 33, most: 38 };

try {
  await checkStart();
  console.log('start check: the service starts, judges, and stops with 0');
} catch (error) {
  // a failed assertion carries both whole verdicts; its message says enough
  console.error(`start check: ${error instanceof Error ? error.message : String(error)}`);
  process.exitCode = 1;
}

async function checkStart(): Promise<void> {
  const folder = mkdtempSync(join(tmpdir(), 'holdfast-start-'));
  try {
    const service = await startService(folder);
    try {
      await checkAnswer(service.address);
    } finally {
      const code = await service.stop();
      assert.equal(code, 0, `stopped by SIGTERM the service ended with ${code}, not with 0`);
    }
    assert.deepEqual(readdirSync(folder), ['holdfast.sqlite'], 'stopped, the service leaves one whole record and nothing beside it');
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

async function checkAnswer(address: string): Promise<void> {
  const answer = await fetch(`${address}/v1/verdicts`, {
    method: 'POST',
    headers: { 'content-type': 'application/json' },
    body: readFileSync(EXAMPLE),
  });
  assert.equal(answer.status, 201, `a new verdict is answered with 201, not ${answer.status}`);
  const served = (await answer.json()) as Verdict;
  assert.equal(served.grade, 'suitable', `the grade of the example is ${served.grade}, not suitable`);
  const power = served.dial.find((row) => row.sweep === 'up' && row.position_pct === 100)?.lampPower_W ?? Number.NaN;
  assert.ok(power > FULL_DIAL_POWER.least && power < FULL_DIAL_POWER.most, `${power} W in the lamps at full dial`);

  const reading = readPairing(EXAMPLE);
  assert.ok(reading.ok);
  const own = await judgeInProcess(reading.pairing, new Date(served.createdAt));
  assert.ok(own.ok);
  // as JSON carries it: without the sign of a zero
  assert.deepEqual(served, JSON.parse(JSON.stringify(own.verdict)), 'over HTTP the verdict differs from the one computed in this process');
}
