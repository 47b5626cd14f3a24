import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { closeRecord, isRecordReadable, openRecord } from '../../db/record.ts';
import { FIXED_NOW, temporaryFolder, temporaryRecord } from '../support/server-temporary-record.ts';

describe('the record', () => {
  it.each([
    ['page_size', 16384],
    ['journal_mode', 'wal'],
    ['synchronous', 1],
    ['foreign_keys', 1],
    ['busy_timeout', 2000],
    ['wal_autocheckpoint', 500],
    ['journal_size_limit', 16777216],
    ['cache_size', -16384],
    ['mmap_size', 0],
    ['temp_store', 2],
    ['trusted_schema', 0],
    ['cell_size_check', 1],
    ['recursive_triggers', 0],
    ['application_id', 0x484f4c44],
  ])('opens with the pragma %s at %s', (pragma, value) => {
    expect(temporaryRecord().pragma(pragma, { simple: true })).toBe(value);
  });

  it('makes the folder it is told to live in', () => {
    const file = join(temporaryFolder(), 'not', 'there', 'yet.sqlite');
    closeRecord(openRecord(file, () => FIXED_NOW));
    expect(existsSync(file)).toBe(true);
  });

  it('leaves no write-ahead log behind when it closes, and may be closed twice', () => {
    const file = join(temporaryFolder(), 'holdfast.sqlite');
    const record = openRecord(file, () => FIXED_NOW);
    expect(existsSync(`${file}-wal`)).toBe(true);
    closeRecord(record);
    closeRecord(record);
    expect(existsSync(`${file}-wal`)).toBe(false);
  });

  it('says that it is not readable once it is closed', () => {
    const record = temporaryRecord();
    expect(isRecordReadable(record)).toBe(true);
    closeRecord(record);
    expect(isRecordReadable(record)).toBe(false);
  });
});
