/** Gives a test a record in a folder of its own, and takes both away when the test ends. */
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { onTestFinished } from 'vitest';
import { closeRecord, openRecord, type RecordDatabase } from '../../db/record.ts';

export const FIXED_NOW = new Date('2026-03-02T08:00:00.000Z');

export function temporaryFolder(): string {
  const folder = mkdtempSync(join(tmpdir(), 'holdfast-test-'));
  onTestFinished(() => rmSync(folder, { recursive: true, force: true }));
  return folder;
}

export function temporaryRecord(now: () => Date = () => FIXED_NOW): RecordDatabase {
  const record = openRecord(join(temporaryFolder(), 'holdfast.sqlite'), now);
  onTestFinished(() => closeRecord(record));
  return record;
}
