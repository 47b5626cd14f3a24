/**
 * Compares ways to store what a verdict rests on, over real verdicts of the example pairings: bytes, and the time to write and to read.
 * Then what a whole verdict costs on disk, with its columns, ties and indexes, at several page sizes.
 *
 *   npm run bench:evidence [-- verdicts]
 */
import { mkdtempSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { brotliCompressSync, brotliDecompressSync, constants, deflateRawSync, inflateRawSync } from 'node:zlib';
import { type Evidence, inColumns, inRows, readEvidence, writeEvidence } from '../db/evidence.ts';
import { closeRecord, openRecord } from '../db/record.ts';
import { figure, machineLine } from './bench-figures.ts';
import { fillRecord, type RealVerdict, realVerdicts } from './catalogue-filling.ts';

interface Way {
  readonly name: string;
  readonly write: (parts: unknown, evidence: Evidence) => Buffer;
  readonly read: (written: Buffer) => unknown;
}

const rows = (parts: unknown) => Buffer.from(JSON.stringify(parts));
const columns = (parts: unknown) => Buffer.from(JSON.stringify(inColumns(parts)));
const parsed = (text: Buffer) => JSON.parse(text.toString()) as unknown;
const brotli = (quality: number) => ({ params: { [constants.BROTLI_PARAM_QUALITY]: quality } });

const WAYS: readonly Way[] = [
  { name: 'JSON', write: rows, read: parsed },
  { name: 'JSON, deflated', write: (parts) => deflateRawSync(rows(parts)), read: (written) => parsed(inflateRawSync(written)) },
  {
    name: 'JSON, brotli 5',
    write: (parts) => brotliCompressSync(rows(parts), brotli(5)),
    read: (written) => parsed(brotliDecompressSync(written)),
  },
  {
    name: 'JSON, brotli 11',
    write: (parts) => brotliCompressSync(rows(parts), brotli(11)),
    read: (written) => parsed(brotliDecompressSync(written)),
  },
  { name: 'columns', write: columns, read: (written) => inRows(parsed(written)) },
  {
    name: 'columns, deflated',
    write: (parts) => deflateRawSync(columns(parts)),
    read: (written) => inRows(parsed(inflateRawSync(written))),
  },
  {
    name: 'columns, brotli 11',
    write: (parts) => brotliCompressSync(columns(parts), brotli(11)),
    read: (written) => inRows(parsed(brotliDecompressSync(written))),
  },
  {
    name: 'columns, deflated with the dictionary',
    write: (_parts, evidence) => writeEvidence(evidence).content,
    read: (content) => readEvidence({ encoding: 1, content }),
  },
];

const verdicts = Number(process.argv[2] ?? 20_000);
const real = await realVerdicts();
console.log(machineLine());
compareWays(real);
comparePages(real);

function compareWays(samples: readonly RealVerdict[]): void {
  console.log(`\n${samples.length} real verdicts, figures as they are stored: bytes, us to write, us to read, on average`);
  const parts = samples.map(({ json: { pairing, assumptions, judgement } }) => ({
    evidence: { pairing, assumptions, judgement },
    parts: { pairing: JSON.parse(pairing), assumptions: JSON.parse(assumptions), judgement: JSON.parse(judgement) } as unknown,
  }));
  for (const { name, write, read } of WAYS) {
    const written = parts.map((sample) => write(sample.parts, sample.evidence));
    const bytes = written.reduce((sum, { length }) => sum + length, 0) / written.length;
    const toWrite = timeOf(() => parts.forEach((sample) => void write(sample.parts, sample.evidence))) / parts.length;
    const toRead = timeOf(() => written.forEach((content) => void read(content))) / parts.length;
    console.log(`  ${name.padEnd(40)}${figure(bytes).padStart(8)}${figure(toWrite).padStart(10)}${figure(toRead).padStart(8)}`);
  }
}

/** us of one call: the fastest of three, which other work on the machine disturbed least */
function timeOf(act: () => void): number {
  const times = [0, 1, 2].map(() => {
    const began = performance.now();
    act();
    return performance.now() - began;
  });
  return Math.min(...times) * 1000;
}

function comparePages(samples: readonly RealVerdict[]): void {
  const folder = mkdtempSync(join(tmpdir(), 'holdfast-bench-'));
  try {
    const file = join(folder, 'holdfast.sqlite');
    const record = openRecord(file, () => new Date());
    fillRecord(record, verdicts, samples, () => undefined);
    console.log(`\n${figure(verdicts)} verdicts with columns, ties and indexes: bytes a verdict on disk, by the size of a page`);
    // A page size takes effect when the file is written anew, and not in WAL mode.
    record.pragma('journal_mode = DELETE');
    for (const size of [4096, 8192, 16384, 32768]) {
      record.pragma(`page_size = ${size}`);
      record.exec('VACUUM');
      console.log(`  ${String(size).padStart(8)}${figure(statSync(file).size / verdicts).padStart(8)}`);
    }
    closeRecord(record);
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
